import { beforeEach, describe, expect, it } from 'vitest';
import { OfflineServer } from '../../tests/support/offline-server';
import { killAndReopen, must, openTablet, recordRemarks, signIn } from '../../tests/support/offline-tablet';
import { smallPlan } from '../../tests/support/small-documents';
import { countUnsentOf, finishSignOuts, keepSession, signOutHere } from './sign-out';
import {
  canMakeEntries,
  listSignedIn,
  readSigningOut,
  refreshSignedIn,
  setWorking,
  whoIsWorking,
} from './tablet';

let server: OfflineServer;
beforeEach(() => {
  server = new OfflineServer();
});

const someone = (personId: string) => ({
  personId,
  name: personId,
  roles: ['technician'],
  sessionUntil: '2026-08-01T00:00:00.000Z',
});

/** Two people side by side at a tablet, the first of them working. */
async function openTwo(job?: string) {
  const opened = await openTablet(server, { people: ['tech', 'mate'], job });
  server.sideBySide = [someone('tech'), someone('mate')];
  await setWorking(opened.offline, 'tech');
  return opened;
}

const asked = () => server.requests.filter(({ path }) => path.startsWith('/api/auth/'));

describe('leaving a tablet', () => {
  it('ends one person’s session and leaves the others signed in', async () => {
    const { offline } = await openTwo();
    await signOutHere(offline, 'tech');
    expect((await listSignedIn(offline)).map(({ person }) => person)).toEqual(['mate']);
    expect(await whoIsWorking(offline)).toBeNull();
    expect(await canMakeEntries(offline, 'tech')).toMatchObject({ code: 'not-signed-in' });
    must(await offline.sync.now());
    expect(asked()).toEqual([{ path: '/api/auth/sign-out', body: { person: 'tech' } }]);
    expect(server.sideBySide.map(({ personId }) => personId)).toEqual(['mate']);
    expect(await readSigningOut(offline)).toEqual([]);
  });

  it('works without a network: it is remembered over a restart and done when the network is back', async () => {
    const { tablet, offline } = await openTwo();
    server.isAway = true;
    await signOutHere(offline, 'tech');
    expect(await finishSignOuts(offline)).toMatchObject({ ok: false, offline: true });
    const after = killAndReopen(tablet, offline);
    expect(await readSigningOut(after)).toEqual(['tech']);
    server.isAway = false;
    // The server still lists them; the tablet doesn't take them back.
    must(await refreshSignedIn(after));
    expect((await listSignedIn(after)).map(({ person }) => person)).toEqual(['mate']);
    must(await after.sync.now());
    expect(server.sideBySide.map(({ personId }) => personId)).toEqual(['mate']);
    expect(await readSigningOut(after)).toEqual([]);
  });

  it('keeps what was not sent, counts it, and sends it under their name', async () => {
    const job = server.addJob(smallPlan());
    const opened = await openTwo(job);
    const { offline } = opened;
    server.isAway = true;
    await recordRemarks(opened, job, { count: 3, by: 'tech' });
    await recordRemarks(opened, job, { from: 4, count: 1, by: 'mate' });
    expect(await countUnsentOf(offline, 'tech')).toBe(3);
    await signOutHere(offline, 'tech');
    expect(await countUnsentOf(offline, 'tech')).toBe(3);
    expect(await offline.db.authorKeys.get('tech')).toBeDefined();
    server.isAway = false;
    must(await offline.sync.now());
    expect(await countUnsentOf(offline, 'tech')).toBe(0);
    expect(server.entriesOf(job).filter(({ by }) => by === 'tech')).toHaveLength(3);
  });

  it('ends their session even where the active one is over', async () => {
    const { offline } = await openTwo();
    server.session = undefined;
    await signOutHere(offline, 'tech');
    must(await finishSignOuts(offline));
    expect(asked().map(({ path }) => path)).toEqual([
      '/api/auth/sign-out',
      '/api/auth/switch',
      '/api/auth/sign-out',
    ]);
    expect(server.sideBySide.map(({ personId }) => personId)).toEqual(['mate']);
  });

  it('is done when the session is gone already', async () => {
    const { offline } = await openTwo();
    server.session = undefined;
    server.sideBySide = [];
    await signOutHere(offline, 'tech');
    must(await finishSignOuts(offline));
    expect(await readSigningOut(offline)).toEqual([]);
  });

  it('does not end the session of somebody who signed in again meanwhile', async () => {
    const { offline } = await openTwo();
    server.isAway = true;
    await signOutHere(offline, 'tech');
    server.isAway = false;
    await signIn(offline, server, 'tech');
    await keepSession(offline, 'tech');
    must(await finishSignOuts(offline));
    expect(asked()).toEqual([]);
    must(await refreshSignedIn(offline));
    expect((await listSignedIn(offline)).map(({ person }) => person)).toEqual(['mate', 'tech']);
  });
});
