import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { type BrowserContext, chromium, type Page } from '@playwright/test';
import { expect, islandsReady, test } from '../support/e2e';
import { demoPerson, signInOnFloor } from '../support/e2e-people';
import { picture } from '../support/e2e-picture';
import { seedJob, type SeededJob } from '../support/e2e-seed';
import { readTrail } from '../support/e2e-trail';
import { FloorDriver } from './floor-driver';
import { hold, openOnFloor, sendAll } from './on-floor';

const SECOND = 1000;

const ines = demoPerson('ines');
const bram = demoPerson('bram');

/** The final fit of the first cap in the order of the loop. */
const firstFinalFit = ({ plan }: { plan: SeededJob['plan'] }): string | undefined =>
  plan.steps.find(({ id }) => id.startsWith('torque-angle.tighten'))?.id;

/** Both torque passes of both bolts, which are one touch. */
const BOTH_PASSES = 'Both at 8, then 25 N·m';

const until = (plan: SeededJob['plan']) => firstFinalFit({ plan });

test('a reload in the middle of a cap asks whether the bolt was turned, and takes each answer', async ({
  app,
  page,
}) => {
  const job = await seedJob(app, { until });
  await signInOnFirstScreen(page);
  const floor = new FloorDriver(page, picture);
  await openOnFloor(page, job.number);
  await floor.runUntil(({ main }) => main === 'Turned 110°');

  await test.step('No: it is offered again, and nothing was recorded', async () => {
    await comeBack(page);
    await expectQuestion(page, '3A', 'Cycle 1 of 3, the angle pass');
    await floor.answer('No');
    await expectAction(page, '3A turn through 110°', 'Cycle 1 of 3, the angle pass');
    expect(await pullsOnServer()).toBe(4);
  });
  await test.step('Yes: it is recorded, and the next bolt comes', async () => {
    await comeBack(page);
    await floor.answer('Yes');
    await expectAction(page, '3B turn through 110°', 'Cycle 1 of 3, the angle pass');
    expect(await pullsOnServer()).toBe(5);
  });
  await test.step('Not sure: both bolts are let off and begin again', async () => {
    await comeBack(page);
    await expectQuestion(page, '3B', 'Cycle 1 of 3, the angle pass');
    await floor.answer('Not sure');
    await floor.runUntil(({ main }) => main === BOTH_PASSES);
    await expectAction(page, '3A 3B to 8 N·m, then to 25 N·m', 'Cycle 1 of 3, the passes to 8 and 25 N·m');
    await sendAll(page);
    const started = readTrail(app, job.id).filter(({ kind }) => kind === 'started-again');
    expect(started.map(({ body }) => body.data.bolts)).toEqual([['3A', '3B']]);
  });

  async function pullsOnServer(): Promise<number> {
    await sendAll(page);
    const step = firstFinalFit(job);
    return readTrail(app, job.id).filter((row) => row.kind === 'tightened' && row.step === step).length;
  }
});

test('another tool or another person within a cap asks whether the bolt was turned', async ({
  app,
  page,
  browser,
  viewport,
}) => {
  const job = await seedJob(app, { until, people: [ines, bram] });
  await signInOnFirstScreen(page);
  const floor = new FloorDriver(page, picture);
  await openOnFloor(page, job.number);
  await floor.runUntil(({ main }) => main === 'Turned 110°');
  const sheet = page.getByRole('dialog');

  await test.step('another torque wrench', async () => {
    await page.getByRole('button', { name: 'Problem' }).tap();
    await sheet.getByRole('button', { name: 'Another torque wrench' }).tap();
    await sheet.getByRole('radio', { name: /20 to 100/ }).tap({ force: true });
    await sheet.getByRole('button', { name: 'It is in my hand' }).tap();
    await expectQuestion(page, '3A', 'Cycle 1 of 3, the angle pass');
    // The touch that took the tool is over by then.
    await floor.passTime(SECOND);
    await floor.answer('Yes');
    await expectAction(page, '3B turn through 110°', 'Cycle 1 of 3, the angle pass');
  });
  await test.step('the same one again asks nothing', async () => {
    await page.getByRole('button', { name: 'Problem' }).tap();
    await sheet.getByRole('button', { name: 'Another torque wrench' }).tap();
    await sheet.getByRole('radio', { name: /20 to 100/ }).tap({ force: true });
    await sheet.getByRole('button', { name: 'It is in my hand' }).tap();
    await expect(sheet).toHaveCount(0);
    await expectAction(page, '3B turn through 110°', 'Cycle 1 of 3, the angle pass');
  });
  await test.step('another person, at another tablet', async () => {
    await sendAll(page);
    const context = await browser.newContext({ viewport, hasTouch: true, baseURL: app.url });
    const second = await context.newPage();
    await second.goto('/floor');
    await islandsReady(second);
    await signInOnFloor(second, bram, { tablet: 'Bay 2' });
    await openOnFloor(second, job.number);
    await expect(second.getByRole('heading', { name: `Take over from ${ines.name}` })).toBeVisible();
    for (const digit of bram.pin) await second.getByRole('button', { name: digit, exact: true }).tap();
    await hold(second, second.getByRole('button', { name: 'Take the job over' }));
    await expectQuestion(second, '3B', 'Cycle 1 of 3, the angle pass');
    await second.getByRole('button', { name: 'No', exact: true }).tap();
    await expectAction(second, '3B turn through 110°', 'Cycle 1 of 3, the angle pass');
    await context.close();
  });
});

test('a browser that is killed loses no entry whose screen had moved on, and comes back to the same pass', async ({
  app,
  launchOptions,
  viewport,
}) => {
  const job = await seedJob(app, { until });
  const folder = await mkdtemp(path.join(tmpdir(), 'witnessmark-profile-'));
  const profile = { ...launchOptions, viewport, hasTouch: true, baseURL: app.url };
  try {
    const first = await chromium.launchPersistentContext(folder, profile);
    const page = await first.newPage();
    await signInOnFirstScreen(page);
    const floor = new FloorDriver(page, picture);
    await openOnFloor(page, job.number);
    await floor.runUntil(({ main }) => main === BOTH_PASSES);
    await first.setOffline(true);
    await floor.runUntil(({ done, main }) => done.includes('released') && main === BOTH_PASSES);
    await floor.press(await floor.look());
    await expectAction(page, '3A turn through 110°', 'Cycle 2 of 3, the angle pass');
    await floor.touch(floor.bottom('Turned 110°'));
    await expectAction(page, '3B turn through 110°', 'Cycle 2 of 3, the angle pass');
    await kill(first);

    const second = await chromium.launchPersistentContext(folder, profile);
    const again = await second.newPage();
    await again.goto(`/floor#job=${job.id}`);
    await islandsReady(again);
    await expectQuestion(again, '3B', 'Cycle 2 of 3, the angle pass');
    await sendAll(again);
    const pulls = readTrail(app, job.id).filter(
      ({ kind, step }) => kind === 'tightened' && step === firstFinalFit(job),
    );
    expect(pulls.map(({ body: { data } }) => [data.bolt, data.cycle, data.stage].join('.'))).toEqual([
      ...['3A.0.0', '3B.0.0', '3A.0.1', '3B.0.1', '3A.0.2', '3B.0.2'],
      ...['3A.1.0', '3B.1.0', '3A.1.1', '3B.1.1', '3A.1.2'],
    ]);
    await second.close();
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
});

async function signInOnFirstScreen(page: Page): Promise<void> {
  await page.goto('/floor');
  await islandsReady(page);
  await signInOnFloor(page, ines, { tablet: 'Bay 1' });
}

/** The page is loaded again, as after an empty battery. */
async function comeBack(page: Page): Promise<void> {
  await page.reload();
  await islandsReady(page);
}

async function expectQuestion(page: Page, bolt: string, place: string): Promise<void> {
  const heading = page.getByRole('heading', { level: 1 });
  await expect(heading).toContainText(bolt);
  await expect(heading).toContainText('was it turned?');
  await expect(heading).toContainText('110°');
  await expect(page.getByText(place)).toBeVisible();
}

async function expectAction(page: Page, words: string, place: string): Promise<void> {
  await expect(page.getByRole('heading', { level: 1 })).toHaveText(words);
  await expect(page.getByText(place)).toBeVisible();
}

/** The whole browser dies at once, as when its battery is pulled. */
async function kill(context: BrowserContext): Promise<void> {
  const closed = context.waitForEvent('close');
  const browser = context.browser();
  if (browser === null) throw new Error('A browser that was started can be killed.');
  const session = await browser.newBrowserCDPSession();
  // It answers no more: that it is dead is seen by the context closing.
  session.send('Browser.crash').catch(() => undefined);
  await closed;
}
