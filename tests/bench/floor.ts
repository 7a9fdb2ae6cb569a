import { chromium, type BrowserContext, type CDPSession, type Locator, type Page } from '@playwright/test';
import type { PlanStep } from '@/domain/plan';
import { startApp, type RunningApp } from '../support/app';
import { findBrowser } from '../support/chromium';
import { measurePaints } from './paint';
import { measureScripts, measurePrecached } from './scripts';
import { each, type Figure, median, quantile, ROUNDS, saying } from './report';
import { TOUCHABLE } from './touchable';
import { type BenchWorkshop, openJob, openWorkshop, workOn } from './workshop';

/** Caps that are tightened, each on a job of its own; a cap of the inline-six takes 15 touches. */
const CAPS = 7;
const BOLTS = 2;
const ENTRIES = 500;
/** How much slower than this machine the tablet is taken to be. */
const SLOWDOWN = 4;
const PATIENCE_MS = 30_000;
/** What to touch next: the action, or a tool that may be taken for the pass, until when the action is barred. */
const ON_TOP = `${TOUCHABLE}, .choice:not([data-barred])`;

/** A job on the tablet with the step that is next on it. */
interface Prepared {
  /** On each the first cap's programme is next. */
  tightening: string[];
  /** 500 entries, and a step that is one touch. */
  long: string;
}

/** What the browser shows: sizes, the time to a durable record, and the times to the first paint and action. */
export async function benchBrowser(): Promise<Figure[]> {
  const app = await startApp();
  const found = await findBrowser();
  const browser = await chromium.launch({
    executablePath: found.executablePath,
    args: found.args,
    env: { ...(process.env as Record<string, string>), ...found.env },
  });
  try {
    saying('preparing jobs and a tablet');
    const workshop = await openWorkshop(app.url);
    const jobs = await prepareJobs(workshop);
    const context = await browser.newContext({
      viewport: { width: 1180, height: 820 },
      hasTouch: true,
      locale: 'en-GB',
    });
    const page = await prepareTablet(context, workshop);
    await page.goto('about:blank');
    await page.goto(floorOf(app, jobs.long));
    await takeUp(page);
    const sizes = [
      await measureScripts(page, floorOf(app, jobs.long)),
      await measurePrecached(page, app.url),
    ];
    const touches = await measureTouches(
      context,
      jobs.tightening.map((job) => floorOf(app, job)),
    );
    await app.kill();
    const paint = await measurePaints(context, floorOf(app, jobs.long));
    const action = await measureFirstAction(context, floorOf(app, jobs.long));
    return [...sizes, touches, paint, action];
  } finally {
    await browser.close();
    await app.dispose();
  }
}

function floorOf({ url }: RunningApp, job: string): string {
  return `${url}/floor#job=${job}`;
}

async function prepareJobs(workshop: BenchWorkshop): Promise<Prepared> {
  const tightening: string[] = [];
  for (let count = 0; count < CAPS; count += 1) {
    const job = await openJob(workshop, 'merrow-s6-rod-bearings');
    const next = ({ kind, phase }: PlanStep) => kind === 'tighten' && phase === 'torque-angle';
    await workOn(workshop, job, { entries: 0, signs: false, next });
    tightening.push(job);
  }
  const long = await openJob(workshop, 'corvane-v8-rod-bearings');
  await workOn(workshop, long, {
    entries: ENTRIES,
    signs: true,
    next: ({ kind }, made) => kind === 'do' && made > ENTRIES * 0.5,
  });
  await workshop.tablet.sync();
  return { tightening, long };
}

/** Signs the technician in on the Floor, names the tablet, and waits for its jobs and its service worker. */
async function prepareTablet(context: BrowserContext, workshop: BenchWorkshop): Promise<Page> {
  const page = await context.newPage();
  page.setDefaultTimeout(PATIENCE_MS);
  await page.goto(`${workshop.url}/floor`);
  const { email, password } = workshop.technician;
  await page.getByLabel('E-mail').fill(email);
  await page.getByLabel('Password').fill(password);
  await page.getByRole('button', { name: 'Sign in' }).tap();
  await page.getByRole('button', { name: 'Bay 1' }).tap();
  await page.getByRole('button', { name: 'Enrol the tablet' }).tap();
  await page.getByText('works offline').nth(CAPS).waitFor();
  await page.waitForFunction(() => navigator.serviceWorker.controller?.state === 'activated');
  return page;
}

/** What the scripted tablet did is gone on with here, and signed for: each is held down once a job. */
async function takeUp(page: Page): Promise<void> {
  await holdDown(page, page.getByRole('button', { name: 'Go on here' }));
  const work = page.getByRole('button', { name: /my work/ });
  await work.or(page.locator(ON_TOP)).first().waitFor();
  if (await work.isVisible()) await holdDown(page, work);
}

async function holdDown(page: Page, button: Locator): Promise<void> {
  const box = await button.boundingBox();
  if (box === null) throw new Error('What is to be held down is not on the screen.');
  await page.mouse.move(box.x + box.width / 2, box.y + box.height / 2);
  await page.mouse.down();
  await button.waitFor({ state: 'detached' });
  await page.mouse.up();
}

/** From the finger on the glass to the end of the strict transaction that holds the record. */
async function measureTouches(context: BrowserContext, addresses: readonly string[]): Promise<Figure> {
  saying(`touches of the tightening programme, on ${CAPS} caps`);
  const touches: Touch[] = [];
  const writes: number[] = [];
  for (const address of addresses) {
    const cap = await tightenCap(context, address);
    touches.push(...cap.touches);
    writes.push(...cap.writes);
  }
  const loose = touches.find(({ durability }) => durability !== 'strict');
  if (loose !== undefined) throw new Error(`A record was written with durability "${loose.durability}".`);
  const times = touches.map(({ ms }) => ms);
  return {
    what: 'Touch to durable record on a tightening step, 95th percentile',
    value: quantile(times, 0.95),
    limit: 50,
    unit: 'ms',
    detail:
      `${times.length} touches: median ${median(times).toFixed(0)} ms, slowest ${Math.max(...times).toFixed(0)} ms; ` +
      'strict durability, records sent to the server meanwhile. A bare strict write of one row in the same page: ' +
      `95th percentile ${quantile(writes, 0.95).toFixed(0)} ms, median ${median(writes).toFixed(0)} ms`,
  };
}

/** Touches what is on top until the last bolt is marked; the tool of each pass is touched where it is asked for. */
async function tightenCap(
  context: BrowserContext,
  address: string,
): Promise<{ touches: Touch[]; writes: number[] }> {
  const page = await context.newPage();
  page.setDefaultTimeout(PATIENCE_MS);
  await page.addInitScript(watchRecords);
  await page.goto(address);
  await takeUp(page);
  let before = '';
  for (;;) {
    const screen = await page.waitForFunction(readScreen, { touchable: ON_TOP, before });
    const { key, x, y, touches } = (await screen.jsonValue()) as Screen;
    if (touches.filter(({ kind }) => kind === 'marked').length >= BOLTS) {
      const writes = await page.evaluate(timeBareWrites, touches.length);
      await page.close();
      return { touches, writes };
    }
    before = key;
    if (x === 0 && y === 0) continue;
    await page.touchscreen.tap(x, y);
  }
}

/** Runs in the page: the action on top, once the screen differs from before, nothing is busy and it lies still. */
function readScreen({ touchable, before }: { touchable: string; before: string }): Screen | false {
  const { benchTouches: touches } = globalThis as unknown as { benchTouches: Touch[] };
  const sheet = document.querySelector('dialog[open]');
  const action = (sheet ?? document).querySelector(touchable);
  const key = `${touches.length} ${sheet === null ? 'step' : 'sheet'} ${action?.textContent ?? ''}`;
  const isBusy = document.querySelector('[aria-busy="true"]') !== null;
  if (isBusy || key === before) return false;
  // What comes after the last touch of a cap may ask for a reading first: then nothing is to be touched.
  if (action === null) return touches.length > 0 ? { key, x: 0, y: 0, touches } : false;
  const { x, y, width, height } = action.getBoundingClientRect();
  const at = { x: x + width / 2, y: y + height / 2 };
  const seen = globalThis as unknown as { benchLastAt?: typeof at };
  const liesStill = seen.benchLastAt?.x === at.x && seen.benchLastAt.y === at.y;
  seen.benchLastAt = at;
  return liesStill && { key, ...at, touches };
}

interface Screen {
  key: string;
  x: number;
  y: number;
  touches: Touch[];
}

interface Touch {
  ms: number;
  kind: string;
  durability: string;
}

/** Runs in the page: notes when a touch began and when a transaction that added to the outbox was complete. */
function watchRecords(): void {
  const touches: Touch[] = [];
  Object.assign(globalThis, { benchTouches: touches });
  let touchedAt: number | undefined;
  addEventListener('pointerdown', (event) => (touchedAt = event.timeStamp), { capture: true });
  const watched = new WeakSet<IDBTransaction>();
  const isTightening = (kind: string) => ['tightened', 'released', 'marked'].includes(kind);
  const { add } = IDBObjectStore.prototype;
  IDBObjectStore.prototype.add = function (value: unknown, key?: IDBValidKey) {
    const { kind = '' } = (value as { entry?: { kind?: string } }).entry ?? {};
    if (this.name === 'outbox' && isTightening(kind) && !watched.has(this.transaction)) {
      watched.add(this.transaction);
      const from = touchedAt;
      const { durability } = this.transaction;
      // By the event's own time: listeners before this one already draw the next screen.
      this.transaction.addEventListener('complete', ({ timeStamp }) => {
        if (from !== undefined) touches.push({ ms: timeStamp - from, kind, durability });
      });
    }
    return add.call(this, value, key);
  };
}

/** Runs in the page: how long the browser takes to keep one row by a strict transaction, so many times. */
async function timeBareWrites(count: number): Promise<number[]> {
  const settled = (request: IDBRequest | IDBTransaction, event: string) =>
    new Promise((resolve, reject) => {
      request.addEventListener(event, resolve, { once: true });
      request.addEventListener('error', reject, { once: true });
    });
  const opening = indexedDB.open('bench-bare-writes', 1);
  opening.addEventListener('upgradeneeded', () => {
    if (!opening.result.objectStoreNames.contains('rows')) opening.result.createObjectStore('rows');
  });
  await settled(opening, 'success');
  const times: number[] = [];
  for (let write = 0; write < count; write += 1) {
    const from = performance.now();
    const transaction = opening.result.transaction('rows', 'readwrite', { durability: 'strict' });
    transaction.objectStore('rows').put({ from, text: 'x'.repeat(1000) }, write);
    await settled(transaction, 'complete');
    times.push(performance.now() - from);
  }
  opening.result.close();
  return times;
}

/** From the start of loading, with no server and a slow processor, to an action that answers to touch. */
async function measureFirstAction(context: BrowserContext, address: string): Promise<Figure> {
  saying(`the first action of a job of ${ENTRIES} entries, ${SLOWDOWN} times slower`);
  const times: number[] = [];
  for (let round = 1; round <= ROUNDS; round += 1) times.push(await firstAction(context, address));
  return {
    what: `Next action touchable: ${ENTRIES} entries, no network, processor slowed ${SLOWDOWN} times`,
    value: median(times),
    limit: 1500,
    unit: 'ms',
    detail: `rounds ${each(times)} ms`,
  };
}

async function firstAction(context: BrowserContext, address: string): Promise<number> {
  const page = await context.newPage();
  page.setDefaultTimeout(PATIENCE_MS);
  const session = await context.newCDPSession(page);
  await slowDown(session);
  await page.addInitScript(watchForAction, TOUCHABLE);
  await page.goto(address);
  const handle = await page.waitForFunction(
    () => (globalThis as unknown as { benchAction?: number }).benchAction,
  );
  const took = await handle.jsonValue();
  await page.close();
  return took ?? Number.NaN;
}

async function slowDown(session: CDPSession): Promise<void> {
  await session.send('Emulation.setCPUThrottlingRate', { rate: SLOWDOWN });
}

/** Runs in the page: looks at each frame whether there is an action to touch. */
function watchForAction(touchable: string): void {
  const look = () => {
    if (document.querySelector(touchable) === null) requestAnimationFrame(look);
    else Object.assign(globalThis, { benchAction: performance.now() });
  };
  requestAnimationFrame(look);
}
