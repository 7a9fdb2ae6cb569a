import { setTimeout as wait } from 'node:timers/promises';
import type { Page } from '@playwright/test';
import { expect, islandsReady, test } from '../support/e2e';
import { demoPerson, signInOnFloor } from '../support/e2e-people';
import { picture } from '../support/e2e-picture';
import { type HeldEntry, makeProfile, prepareKill, readHeld } from '../support/e2e-profile';
import { seedJob, type SeededJob } from '../support/e2e-seed';
import { countRefused, readTrail } from '../support/e2e-trail';
import { Chance } from '../support/simulation/seed';
import { FloorDriver, type Look } from './floor-driver';
import { openOnFloor, sendAll } from './on-floor';

/*
 * The tablet's browser is killed at any moment while somebody tightens caps, with and without a network. The
 * hands remember what they pulled: whatever the screen had moved on from is in IndexedDB after the kill, each
 * pull comes into the record once, and what the kill left open is asked for, never guessed.
 */

const KILLS = 20;
const SEED = 20_260_704;
/** From the touch to past the moment at which the screen moves on. */
const LONGEST_WAIT_MS = 140;
const MINUTE = 60_000;

const ines = demoPerson('ines');

test(`a browser that is killed ${KILLS} times loses nothing whose screen had moved on, and records nothing twice`, async ({
  app,
  launchOptions,
  viewport,
}) => {
  test.setTimeout(6 * MINUTE);
  const until = ({ steps }: SeededJob['plan']) =>
    steps.find(({ id }) => id.startsWith('torque-angle.tighten'))?.id;
  const job = await seedJob(app, { until });
  const profile = await makeProfile({ ...launchOptions, viewport, hasTouch: true, baseURL: app.url });
  const chance = new Chance(SEED);
  const hands = new Hands(job);
  try {
    let context = await profile.start();
    let page = await context.newPage();
    await page.goto('/floor');
    await islandsReady(page);
    await signInOnFloor(page, ines, { tablet: 'Bay 1' });
    await openOnFloor(page, job.number);
    for (let kill = 0; kill < KILLS; kill += 1) {
      const floor = new FloorDriver(page, picture);
      for (let left = chance.between(0, 2); left > 0; left -= 1) await hands.doOne(floor);
      await hands.comeToPull(floor);
      const now = await page.evaluate(() => Date.now());
      const dies = await prepareKill(context);
      await hands.pullAndDie(floor, dies, kill % 2 === 0 ? 'shown' : chance.next() * LONGEST_WAIT_MS);

      context = await profile.start();
      // Every other time there is no network when the tablet comes back.
      await context.setOffline(kill % 4 < 2);
      page = await context.newPage();
      await page.clock.install({ time: now + MINUTE });
      await page.goto(`/floor#job=${job.id}`);
      await islandsReady(page);
      hands.compare(await readHeld(page, job.id));
    }
    const floor = new FloorDriver(page, picture);
    await hands.comeToPull(floor);
    await context.setOffline(false);
    await sendAll(page);
    await context.close();
    hands.compareWithServer(readTrail(app, job.id));
    expect(countRefused(app, job.id)).toBe(0);
    const description = `${KILLS} kills, ${hands.unrecorded} of them before the last touch was recorded`;
    test.info().annotations.push({ type: 'seen', description });
  } finally {
    await profile.remove();
  }
});

/** Somebody at the bench who remembers each pull that they made, whatever became of the screen. */
class Hands {
  /** Pulls in the order in which they were made: bolt, cycle and stage. */
  private readonly pulled: string[] = [];
  /** Those that the screen had moved on from. */
  private readonly shown = new Set<string>();
  private readonly held = new Set<string>();
  /** After how many kills the last touch had not become a record. */
  unrecorded = 0;

  constructor(private readonly job: SeededJob) {}

  /** Does what the screen asks for, and waits until it has moved on. */
  async doOne(floor: FloorDriver): Promise<void> {
    const look = await floor.look();
    const pulls = await this.pullsOn(floor.page, look);
    const before = await screenText(floor.page);
    if (look.words.startsWith('yes, no or not sure')) {
      const wasPulled = pulls.every((pull) => this.pulled.includes(pull));
      await floor.answer(wasPulled ? 'Yes' : 'No');
      await hasMoved(floor.page, before);
      if (wasPulled) this.show(pulls);
      return;
    }
    this.pull(pulls);
    await floor.doNext(look);
    if (look.isBarred || pulls.length === 0) return;
    await hasMoved(floor.page, before);
    this.show(pulls);
  }

  /** Goes on until the next touch is one after a pull. */
  async comeToPull(floor: FloorDriver): Promise<void> {
    for (;;) {
      const look = await floor.look();
      const isAsked = look.words.startsWith('yes, no or not sure');
      if (!look.isBarred && !isAsked && (await this.pullsOn(floor.page, look)).length > 0) return;
      await this.doOne(floor);
    }
  }

  /** Pulls, touches the screen, and has the browser die: as soon as the screen moves on, or after so long. */
  async pullAndDie(floor: FloorDriver, dies: () => Promise<void>, when: 'shown' | number): Promise<void> {
    const look = await floor.look();
    const pulls = await this.pullsOn(floor.page, look);
    this.pull(pulls);
    const before = await screenText(floor.page);
    const moved = hasMoved(floor.page, before)
      .then(() => this.show(pulls))
      .catch((error: unknown) => {
        // A dead browser shows nothing any more; with 'shown' it may not die before.
        if (when === 'shown') throw error;
      });
    const touched = floor.touch(floor.bottom(look.main)).catch(() => undefined);
    await (when === 'shown' ? moved : wait(when));
    await dies();
    await Promise.all([moved, touched]);
  }

  /** What the screen had moved on from is held; what is held was pulled, and nothing is held twice. */
  compare(rows: readonly HeldEntry[]): void {
    const ids = rows.map(({ entry }) => entry.id);
    expect(ids, 'nothing is held twice').toHaveLength(new Set(ids).size);
    expect(rows.filter(({ where }) => where === 'refused')).toEqual([]);
    for (const id of this.held) expect(ids, 'what was held stays').toContain(id);
    for (const id of ids) this.held.add(id);
    const numbers = rows.map(({ entry }) => `${entry.device} ${entry.deviceSeq}`);
    expect(numbers, 'no number is given out twice').toHaveLength(new Set(numbers).size);
    const recorded = this.pullsIn(rows.map(({ entry }) => entry));
    expect(recorded.filter((pull) => this.shown.has(pull)).sort(), 'what was shown is held, once').toEqual(
      [...this.shown].sort(),
    );
    const open = this.pulled.filter((pull) => !recorded.includes(pull));
    if (open.length > 0) this.unrecorded += 1;
    expect(
      recorded.filter((pull) => !this.pulled.includes(pull)),
      'nothing that was not pulled',
    ).toEqual([]);
    expect([[], this.pulled.slice(-open.length)], 'at most the last touch is open').toContainEqual(open);
  }

  /** In the end the server's file has every pull, once, in the order in which they were made. */
  compareWithServer(
    rows: readonly { id: string; kind: string; step: string | null; body: { data: unknown } }[],
  ): void {
    const entries = rows.map(({ id, kind, step, body }) => ({
      id,
      kind,
      step: step ?? undefined,
      data: body.data,
    }));
    expect(this.pullsIn(entries)).toEqual(this.pulled);
    const ids = new Set(entries.map(({ id }) => id));
    for (const id of this.held) expect(ids, 'what the tablet held is with the server').toContain(id);
    const acts = entries
      .filter(({ kind }) => kind === 'released' || kind === 'marked' || kind === 'turned' || kind === 'done')
      .map(({ kind, step, data }) => JSON.stringify([kind, step, data]));
    expect(acts, 'no other act twice').toHaveLength(new Set(acts).size);
    expect(new Set(this.pulled).size).toBeGreaterThan(KILLS * 2);
  }

  private pull(pulls: readonly string[]): void {
    // A pull that was made before the browser died is not made again for the screen.
    this.pulled.push(...pulls.filter((pull) => !this.pulled.includes(pull)));
  }

  private show(pulls: readonly string[]): void {
    for (const pull of pulls) this.shown.add(pull);
  }

  /** The pulls that the screen asks for, or asks about: those of a cap's final fit. */
  private async pullsOn(page: Page, { heading }: Look): Promise<string[]> {
    const [, names = ''] = /^((?:\d[AB] ?)+)/.exec(heading) ?? [];
    const [, cycle] = /Cycle (\d) of \d/.exec(await page.locator('main').innerText()) ?? [];
    const kind = heading.includes('°') ? 'angle' : heading.includes('N·m') ? 'torque' : undefined;
    if (names === '' || cycle === undefined || kind === undefined) return [];
    const stages = this.job.plan.programmes.rodCap?.cycles[Number(cycle) - 1] ?? [];
    const wanted = stages.flatMap((stage, index) => (stage.kind === kind ? [index] : []));
    return wanted.flatMap((stage) =>
      (names.match(/\d[AB]/g) ?? []).map((bolt) => `${bolt}.${Number(cycle) - 1}.${stage}`),
    );
  }

  private pullsIn(entries: readonly { kind: string; step?: string | undefined; data: unknown }[]): string[] {
    return entries.flatMap(({ kind, step, data }) => {
      if (kind !== 'tightened' || step?.startsWith('torque-angle.tighten') !== true) return [];
      const { bolt, cycle, stage } = data as { bolt: string; cycle: number; stage: number };
      return [`${bolt}.${cycle}.${stage}`];
    });
  }
}

/**
 * What tells one screen from the next: the heading and the record of the last act. Where that record lies is left
 * out: it changes from "on this tablet" to "sent" while the screen stays.
 */
const TELLING = ['main h1', 'main .floor-done'];
const WHERE = /, (on this tablet|sent|waiting|refused)/.source;

const screenText = (page: Page) =>
  page.evaluate(
    ([telling, where]) =>
      telling
        .map((selector) => document.querySelector(selector)?.textContent ?? '')
        .join('|')
        .replace(new RegExp(where), ''),
    [TELLING, WHERE] as const,
  );

/** Waits, inside the page, for the first change that shows something else. */
const hasMoved = (page: Page, before: string) =>
  page.evaluate(
    async ([telling, where, was]) => {
      const now = () =>
        telling
          .map((selector) => document.querySelector(selector)?.textContent ?? '')
          .join('|')
          .replace(new RegExp(where), '');
      const seen = new Promise<void>((resolve) => {
        const look = new MutationObserver(() => {
          if (now() !== was) resolve();
        });
        look.observe(document.body, { subtree: true, childList: true, characterData: true });
      });
      if (now() === was) await seen;
    },
    [TELLING, WHERE, before] as const,
  );
