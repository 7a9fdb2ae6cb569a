import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import { readTablet, setWorking, whoIsWorking } from '@/offline/tablet';
import type { Offline } from '@/offline/offline';
import { Journal } from '../../../tests/support/journal';
import { OfflineServer } from '../../../tests/support/offline-server';
import { openTablet, recordRemarks } from '../../../tests/support/offline-tablet';
import { smallPlan } from '../../../tests/support/small-documents';
import { FloorContext } from './floor-context';
import { createFloorStore } from './floor-store';
import { SignOutSheet } from './SignOutSheet';
import { StartScreen } from './StartScreen';

let server: OfflineServer;
let job: string;
beforeEach(() => {
  server = new OfflineServer();
  job = server.addJob(smallPlan());
});

async function openFloor() {
  const { tablet, offline } = await openTablet(server, { people: ['tech', 'mate'], job });
  await setWorking(offline, 'tech');
  const store = createFloorStore(offline);
  await store.getState().reload();
  return { tablet, offline, store };
}

function showSheet(store: ReturnType<typeof createFloorStore>, { isOnline = true } = {}) {
  const onLeft = vi.fn();
  const onClose = vi.fn();
  render(
    <FloorContext value={store}>
      <SignOutSheet
        person={{ id: 'tech', name: 'T. Nician' }}
        isOnline={isOnline}
        onClose={onClose}
        onLeft={onLeft}
      />
    </FloorContext>,
  );
  return { onLeft, onClose, user: userEvent.setup() };
}

const main = () => screen.getByRole('dialog').querySelector<HTMLElement>('.main-action')!;

describe('signing out on the Floor', () => {
  it('says that what was not sent is kept and goes under the same name, and leaves the others', async () => {
    const opened = await openFloor();
    server.isAway = true;
    await recordRemarks(opened, job, { count: 2, by: 'tech' });
    const { user, onLeft } = showSheet(opened.store, { isOnline: false });
    expect(
      await screen.findByText(
        '2 records are not sent yet. They are kept here and still go under T. Nician’s name.',
      ),
    ).toBeVisible();
    expect(
      screen.getByText(/No network now: .* the server is told as soon as there is a network/),
    ).toBeVisible();
    await vi.waitFor(() => expect(main()).not.toHaveAttribute('aria-disabled'));
    await user.click(main());
    await vi.waitFor(() => expect(onLeft).toHaveBeenCalledOnce());
    expect(opened.store.getState().signedIn.map(({ person }) => person)).toEqual(['mate']);
    expect(opened.store.getState().working).toBeNull();
  });

  it('is barred with words while a cap that they work on stands half done', async () => {
    const { store, offline } = await openFloor();
    await giveCapTo({ by: 'tech' }, offline);
    const { user, onLeft } = showSheet(store);
    expect(await screen.findByText(/: 1A and 1B stand half tightened\. Finish them/)).toBeVisible();
    expect(main()).toHaveAttribute('aria-disabled', 'true');
    expect(main()).toHaveTextContent('a cap is half done');
    await user.click(main());
    expect(onLeft).not.toHaveBeenCalled();
    expect(await whoIsWorking(offline)).toBe('tech');
  });

  it('is free once somebody else has taken the job over', async () => {
    const { store, offline } = await openFloor();
    await giveCapTo({ by: 'mate' }, offline);
    showSheet(store);
    await vi.waitFor(() => expect(main()).not.toHaveAttribute('aria-disabled'));
  });

  it('is free while their cap stands half done at another tablet', async () => {
    const { store, offline } = await openFloor();
    await giveCapTo({ by: 'tech', device: 'another-tablet' }, offline);
    showSheet(store);
    await vi.waitFor(() => expect(main()).not.toHaveAttribute('aria-disabled'));
  });
});

/** The job as it would be in the middle of a cap in somebody's hands, here unless another tablet is named. */
async function giveCapTo(whose: { by: string; device?: string }, offline: Offline): Promise<void> {
  const journal = new Journal(smallPlan()).performUntil('build.tighten@rod1');
  journal.tightenOnce('build.tighten@rod1');
  const view = await offline.jobs.open(job);
  const { id: device } = await readTablet(offline);
  const state = { ...journal.state, working: { ...journal.state.working!, device, ...whose } };
  vi.spyOn(offline.jobs, 'get').mockReturnValue({ ...view, state });
}

describe('the first screen', () => {
  it('offers whoever works here to sign out, and shows the others still there', async () => {
    const { store } = await openFloor();
    render(
      <FloorContext value={store}>
        <StartScreen />
      </FloorContext>,
    );
    const user = userEvent.setup();
    await user.click(screen.getByRole('button', { name: 'Sign T. Nician out' }));
    await vi.waitFor(() => expect(main()).not.toHaveAttribute('aria-disabled'));
    await user.click(within(screen.getByRole('dialog')).getByRole('button', { name: 'Sign out' }));
    await vi.waitFor(() => expect(screen.queryByRole('button', { name: 'T. Nician' })).toBeNull());
    expect(screen.getByRole('button', { name: 'M. Ate' })).toBeVisible();
    expect(screen.queryByRole('button', { name: /^Sign .* out$/ })).toBeNull();
  });
});
