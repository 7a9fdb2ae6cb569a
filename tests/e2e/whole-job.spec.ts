import { spawnSync } from 'node:child_process';
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import type { Page } from '@playwright/test';
import { expect, islandsReady, test, workerReady } from '../support/e2e';
import { demoPerson, signInAtDesk, signInOnFloor } from '../support/e2e-people';
import { picture } from '../support/e2e-picture';
import { countRefused, isSignedByAuthor, readTrail, type TrailRow } from '../support/e2e-trail';
import { FloorDriver, type Look } from './floor-driver';
import { openOnFloor, sendAll } from './on-floor';

/*
 * A whole job on one tablet that has a network only for what can't be done without one.
 *
 * The warm-up is watched for twenty minutes, and the pulls of a wrench take their seconds; the page's clock is
 * moved on by that time (page.clock) instead of being waited for. The server's clock is not touched, so the
 * tablet's runs ahead of it by about an hour at the end. That is what a tablet whose clock is wrong looks like:
 * its entries are recorded all the same, and the difference is noted on each of them.
 */

const MINUTE = 60_000;
const RODS = 6;
const BOLTS_PER_ROD = 2;
const CYCLES = 3;

// A trace of several hundred touches would take longer than the touches.
test.use({ trace: 'off', screenshot: 'only-on-failure' });

const supervisor = demoPerson('supervisor');
const ines = demoPerson('ines');
const halloran = demoPerson('halloran');

test('a whole job goes through a tablet whose network is gone for most of it', async ({
  app,
  page,
  expectedErrors,
}) => {
  test.setTimeout(8 * MINUTE);
  // The server is dead for most of the job, which the browser reports for every try to reach it.
  expectedErrors.push(
    /ERR_CONNECTION_REFUSED|ERR_CONNECTION_RESET|ERR_EMPTY_RESPONSE|ERR_SOCKET_NOT_CONNECTED/,
  );
  await page.clock.install();
  await signInAtDesk(page, supervisor);
  const job = await openJob(page);
  await readyTheTablet(page, job.number);

  await app.kill();
  await page.goto('/floor');
  await islandsReady(page);
  await openOnFloor(page, job.number);
  const floor = new FloorDriver(page, picture);

  await test.step('strip-down and the first rods, by the first technician', async () => {
    await floor.runUntil(startsOn(/^Rod 2: cap off square/));
  });
  await test.step('the next shift takes over and comes to the first hold point', async () => {
    await floor.changeShift(halloran.name, halloran.pin);
    await floor.runUntil(atHoldPoint);
    await expect(page.getByRole('heading', { name: 'Hold point: caps marked' })).toBeVisible();
    await floor.sign({ name: supervisor.name, pin: supervisor.pin, count: 12, isOffline: true });
    await expect(page.getByText('Signed, to be checked', { exact: true })).toBeVisible();
  });
  await test.step('caps closed and the crankcase ready, still with no network', async () => {
    await floor.runUntil(atHoldPoint);
  });
  for (const holdPoint of ['clear to close', 'clear to start']) {
    await test.step(`a network for "${holdPoint}" only`, async () => {
      await expect(page.getByRole('heading', { name: `Hold point: ${holdPoint}` })).toBeVisible();
      await app.restart();
      await sendAll(page);
      await floor.sign({ name: supervisor.name, pin: supervisor.pin, isOffline: false });
      await expect(floor.bottom('Send it now')).toHaveCount(0);
      await app.kill();
      await floor.runUntil((look) => atHoldPoint(look) || waitsForSupervisor(look));
    });
  }
  await test.step('the supervisor hands over, and the network is back', async () => {
    // No PIN: the last signature with one is minutes old.
    await floor.changeShift(supervisor.name);
    await app.restart();
    await sendAll(page);
    await floor.runUntil(({ heading }) => heading === 'The job is handed over');
  });
  const made = await sendAll(page);
  process.stdout.write(`${report(floor)}\n`);

  const rows = readTrail(app, job.id);
  expectWholeTrail(rows);
  expect(rows, 'what the tablet says that it made').toHaveLength(made);
  expect(countRefused(app, job.id)).toBe(0);
  expectRightWork(rows);
  expectTrueAuthors(rows);
  expect(floor.taps, 'touches for the six').toBeLessThanOrEqual(TOUCHES);
  await expectExportVerifies(page, job.id);
});

/** What a six takes at most, digits of PINs and numbers included. */
const TOUCHES = 330;

function startsOn(heading: RegExp): (look: Look) => boolean {
  return (look) => heading.test(look.heading);
}

function atHoldPoint({ main }: Look): boolean {
  return /^Hand .* to the signer$/.test(main);
}

function waitsForSupervisor({ words }: Look): boolean {
  return words.startsWith('a supervisor hands over');
}

/** Opens a job for the six at the desk, as a supervisor with the tablet in hand. */
async function openJob(page: Page): Promise<{ id: string; number: string }> {
  await page.goto('/jobs/new');
  await islandsReady(page);
  await page.getByLabel('Route').selectOption({ label: 'Rod bearings, Merrow S6 (MS6-30)' });
  await page.getByLabel('How is the steering assisted?').selectOption('electric');
  await page.getByLabel('Is the front axle driven?').selectOption('not-driven');
  await page.getByLabel('Is a stiffening plate fitted').selectOption('none');
  await page.getByLabel('Registration').fill('MX 41 KLO');
  await page.getByLabel('VIN').fill('WTNSMRKXXMS600042');
  await page.getByLabel('Odometer').fill('143210');
  await page.getByRole('textbox', { name: 'Name' }).fill('Petra Sandholm');
  await page.getByRole('textbox', { name: 'E-mail' }).fill('petra@customer.example');
  await page.getByLabel('May approve extra work').fill('The customer, by telephone');
  await page.getByLabel(ines.name).check();
  await page.getByLabel(halloran.name).check();
  await page.getByRole('button', { name: 'Open the job' }).tap();
  await page.waitForURL(/\/jobs\/[0-9a-f-]{36}$/);
  const heading = await page.getByRole('heading', { name: /^Job / }).innerText();
  const number = /^Job (\S+),/.exec(heading)?.[1];
  const id = new URL(page.url()).pathname.split('/').at(-1);
  if (number === undefined || id === undefined) throw new Error(`No job number in “${heading}”.`);
  return { id, number };
}

/** Both technicians sign in beside the supervisor, and the job is brought onto the tablet. */
async function readyTheTablet(page: Page, number: string): Promise<void> {
  await page.goto('/floor');
  await islandsReady(page);
  await signInOnFloor(page, halloran);
  await signInOnFloor(page, ines);
  const row = page.getByRole('listitem').filter({ hasText: `Job ${number}` });
  const keep = row.getByRole('button', { name: 'Make available offline' });
  await expect(row).toBeVisible();
  if (await keep.isVisible()) await keep.tap();
  await expect(row).toContainText('works offline');
  await workerReady(page);
}

function report({ taps, scans, tapsBy }: FloorDriver): string {
  const kinds = [...tapsBy].sort(([, a], [, b]) => b - a).map(([kind, count]) => `${kind} ${count}`);
  return `The six took ${taps} touches and ${scans} scans: ${kinds.join(', ')}.`;
}

/** Every entry once, numbered without a gap by the server and by the tablet, each signed by its author's key. */
function expectWholeTrail(rows: TrailRow[]): void {
  expect(rows.map(({ seq }) => seq)).toEqual(rows.map((_row, index) => index + 1));
  expect(new Set(rows.map(({ id }) => id)).size).toBe(rows.length);
  expect(new Set(rows.map(({ device }) => device)).size).toBe(1);
  expect(rows.map(({ deviceSeq }) => deviceSeq)).toEqual(rows.map((_row, index) => index + 1));
  const times = rows.map(({ at }) => at);
  expect(times).toEqual([...times].sort());
  for (const row of rows) {
    expect(isSignedByAuthor(row), `the signature of entry ${row.seq}`).toBe(true);
    expect([row.keyPerson, row.keyDevice], `the key of entry ${row.seq}`).toEqual([row.by, row.device]);
  }
}

/** As many pulls, releases and marks as the engine sheet asks for. */
function expectRightWork(rows: TrailRow[]): void {
  const count = (kind: string, step: RegExp) =>
    rows.filter((row) => row.kind === kind && step.test(row.step ?? '')).length;
  const bolts = RODS * BOLTS_PER_ROD;
  expect(count('tightened', /^torque-angle\.tighten/), 'final fit: two torques and an angle a cycle').toBe(
    bolts * CYCLES * 3,
  );
  expect(count('released', /^torque-angle\.tighten/), 'released between the cycles').toBe(
    bolts * (CYCLES - 1),
  );
  expect(count('marked', /^torque-angle\.tighten/), 'a mark a head').toBe(bolts);
  expect(count('tightened', /^measurement\.squeeze/), 'measuring fit: two torques').toBe(bolts * 2);
  expect(count('tightened', /^measurement\.nip/), 'interim fit: one torque').toBe(bolts);
  expect(count('gauged', /./), 'front and rear of each rod').toBe(RODS * 2);
  expect(count('signed', /./)).toBe(3);
}

/** Whoever had the tablet is the author, and the signatures are the supervisor's. */
function expectTrueAuthors(rows: TrailRow[]): void {
  const shifts: string[] = [];
  for (const { kind, name, seq } of rows) {
    if (kind === 'signed' || kind === 'opened') expect(name, `entry ${seq}`).toBe(supervisor.name);
    else if (shifts.at(-1) !== name) shifts.push(name);
  }
  expect(shifts).toEqual([ines.name, halloran.name, supervisor.name]);
  expect(rows.filter(({ kind }) => kind === 'took-over').map(({ name }) => name)).toEqual([
    halloran.name,
    supervisor.name,
  ]);
}

/** The exported file is whole; one flipped byte breaks it; another file is no trail. */
async function expectExportVerifies(page: Page, job: string): Promise<void> {
  const folder = await mkdtemp(path.join(tmpdir(), 'witnessmark-export-'));
  try {
    const answer = await page.request.get(`/api/jobs/${job}/export`);
    expect(answer.status()).toBe(200);
    const bytes = await answer.body();
    const whole = path.join(folder, 'trail.json');
    await writeFile(whole, bytes);
    expect(verifyTrail(whole)).toBe(0);

    const flipped = path.join(folder, 'flipped.json');
    const changed = Buffer.from(bytes);
    // A digit of a clearance that somebody would like to be another.
    const place = changed.indexOf('"clearance":"0.046"') + '"clearance":"0.04'.length;
    changed[place] = (changed[place] ?? 0) ^ 1;
    await writeFile(flipped, changed);
    expect(verifyTrail(flipped)).toBe(1);

    const other = path.join(folder, 'other.json');
    await writeFile(other, await readFile('package.json'));
    expect(verifyTrail(other)).toBe(2);
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

function verifyTrail(file: string): number | null {
  const { status } = spawnSync(process.execPath, ['src/commands/run.mjs', 'verify-trail', file]);
  return status;
}
