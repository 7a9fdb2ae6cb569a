import type { Page } from '@playwright/test';
import { expect, islandsReady, test } from '../support/e2e';
import { demoPerson, signInOnFloor } from '../support/e2e-people';
import { picture } from '../support/e2e-picture';
import { seedJob } from '../support/e2e-seed';
import { countRefused, isSignedByAuthor, readTrail } from '../support/e2e-trail';
import { FloorDriver } from './floor-driver';
import { openOnFloor, sendAll } from './on-floor';

/*
 * A technician's session ends before the network is back. What they recorded is proved by the key that signed
 * it, so it arrives as theirs all the same.
 */

const MINUTE = 60_000;
const WANTED = 40;

const ines = demoPerson('ines');
const halloran = demoPerson('halloran');
const supervisor = demoPerson('supervisor');

test('what was recorded offline arrives under its true authors after they have gone home', async ({
  app,
  page,
  context,
  expectedErrors,
}) => {
  test.setTimeout(4 * MINUTE);
  expectedErrors.push(/ERR_INTERNET_DISCONNECTED/);
  const job = await seedJob(app, {
    people: [ines, halloran],
    // Two caps are left to tighten, which is more than forty entries before the hold point.
    until: ({ steps }) => steps.filter(({ id }) => id.startsWith('torque-angle.tighten')).at(-2)?.id,
  });
  const seeded = readTrail(app, job.id).length;
  await page.clock.install();
  await page.goto('/floor');
  await islandsReady(page);
  await signInOnFloor(page, supervisor, { tablet: 'Bay 2' });
  await signInOnFloor(page, halloran);
  await signInOnFloor(page, ines);
  const floor = new FloorDriver(page, picture);
  await openOnFloor(page, job.number);
  // That it is taken up at this tablet is a record too.
  await expect.poll(() => readTrail(app, job.id).length).toBe(seeded + 1);
  await floor.runUntil(({ main }) => main.startsWith('Choose the'));

  await context.setOffline(true);
  await floor.runUntil(({ main }) => /^Hand .* to the signer$/.test(main));
  await floor.sign({ name: supervisor.name, pin: supervisor.pin, count: 12, isOffline: true });
  await floor.changeShift(halloran.name, halloran.pin);
  await floor.runUntil(({ heading }) => heading.startsWith('Oil pick-up and pipes on'));
  expect(readTrail(app, job.id), 'nothing has left the tablet').toHaveLength(seeded + 1);

  await signOut(page, ines.name);
  await context.setOffline(false);
  await sendAll(page);

  const rows = readTrail(app, job.id).slice(seeded);
  expect(rows.map(({ deviceSeq }) => deviceSeq)).toEqual(rows.map((_row, index) => index + 1));
  expect(rows.filter((row) => !isSignedByAuthor(row) || row.keyPerson !== row.by)).toEqual([]);
  const byHand = (name: string) => rows.filter((row) => row.name === name);
  const takenOver = rows.findLastIndex(({ kind }) => kind === 'took-over');
  expect(byHand(ines.name).length).toBeGreaterThanOrEqual(WANTED);
  expect(byHand(supervisor.name).map(({ kind }) => kind)).toEqual(['signed']);
  expect(byHand(halloran.name)).toEqual(rows.slice(takenOver));
  expect(countRefused(app, job.id)).toBe(0);
});

/** Ends a session at the server, past the tablet, which has no network for it. */
async function signOut(page: Page, name: string): Promise<void> {
  const { sideBySide } = (await (await page.request.get('/api/me')).json()) as {
    sideBySide: { personId: string; name: string }[];
  };
  const person = sideBySide.find((one) => one.name === name)?.personId;
  const answer = await page.request.post('/api/auth/sign-out', { data: { person } });
  expect(answer.status()).toBe(200);
}
