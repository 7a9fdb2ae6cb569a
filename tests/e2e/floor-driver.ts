import { expect, type Locator, type Page } from '@playwright/test';

/*
 * Somebody at the tablet: looks at the screen and does the next thing that it asks for, by role and name, with
 * a finger. It knows the trade (what is read off a gauge, how many cloths lie there) and nothing of the program
 * behind the screen.
 *
 * The hands are quicker than a technician's, so the page's clock is moved on after each touch by the time that
 * the pull takes: a second touch within half a second would rightly not count.
 */

/** What the screen says. */
export interface Look {
  /** The heading of the screen. */
  heading: string;
  /** The record of the last act, with its time. */
  done: string;
  /** The block at the bottom. */
  main: string;
  /** The small words of that block: what comes, or why it can't be pressed. */
  words: string;
  isBarred: boolean;
  /** Why the last touch was not recorded. */
  refusal: string;
  /** The title of what lies over the screen. */
  sheet: string | undefined;
}

export interface Signer {
  name: string;
  pin: string;
  /** How many the signer counts, where the hold point asks. */
  count?: number;
  /** With no network the PIN is entered twice. */
  isOffline: boolean;
}

const SECOND = 1000;
/** A pull, a look, a step aside. */
const PACE_MS = 6 * SECOND;
const WATCH_STEP_MS = 15 * SECOND;
const LONGEST_RUN = 900;
const HOLD_MS = 1500;
const IS_MY_WORK = /^Th(is|ese) \d+ entr(y is|ies are) my work$/;

/** What the gauges and the dial show, by what the keypad asks for. */
const READINGS: [asked: RegExp, value: string][] = [
  [/^Side clearance/, '0.26'],
  [/^Oil pressure just after/, '2.4'],
  [/^Oil pressure, warm/, '1.6'],
  [/^Oil temperature/, '94'],
  [/^cloths/, '12'],
  [/^lamps and small tools/, '5'],
];

const BAND = '0.046';
const BLADE = '0.25 mm';

export class FloorDriver {
  /** Touches of the glass, digits of PINs and numbers included; a scan of a label is none. */
  taps = 0;
  scans = 0;
  /** Touches by the kind of screen they were made on. */
  readonly tapsBy = new Map<string, number>();
  private photographs = 0;
  private at = 'start';

  constructor(
    readonly page: Page,
    /** A picture that differs from every other, as JPEG. */
    private readonly picture: (nth: number) => Promise<Buffer>,
  ) {}

  /** What stands on the screen once it takes touches. */
  async look(): Promise<Look> {
    const ready = await this.page.waitForFunction(readScreen, { mustBeReady: true });
    const look = await ready.jsonValue();
    if (look === null) throw new Error('A screen that takes touches shows something.');
    return look;
  }

  /** Goes on until the screen is as asked, a touch or two at a time. */
  async runUntil(isThere: (look: Look) => boolean): Promise<Look> {
    for (let turn = 0; turn < LONGEST_RUN; turn += 1) {
      const look = await this.look();
      if (isThere(look)) return look;
      await this.doNext(look);
    }
    throw new Error(`The job never came there. It stands at: ${JSON.stringify(await this.look())}`);
  }

  /** Does the one thing that this screen asks for. */
  async doNext(look: Look): Promise<void> {
    this.at = kindOf(look);
    if (!look.isBarred) {
      if (IS_MY_WORK.test(look.main)) return this.signWork(look);
      if (look.main === 'Take the photograph') return this.photograph();
      return this.press(look);
    }
    if (look.words === 'touch the one in your hand') return this.takeTool(look);
    if (/lot of the .* is needed|the lot is needed/.test(look.words)) return this.giveLot(look);
    if (/^count them$|^key in /.test(look.words)) return this.keyIn(look);
    if (look.words.startsWith('touch a band')) return this.touch(this.button(BAND));
    if (look.words === 'touch a blade') return this.touch(this.button(BLADE));
    if (look.words === 'touch the grade that most have') return this.gradeShells();
    if (look.words === 'touch what the odometer shows') return this.readOdometer();
    if (/^next look at|^until the time is over/.test(look.words)) return this.passTime(WATCH_STEP_MS);
    if (look.words.startsWith('yes, no or not sure')) return this.answer('No');
    throw new Error(`Nobody would know what to do here: ${JSON.stringify(look)}`);
  }

  /** Touches something with a finger. */
  async touch(target: Locator): Promise<void> {
    await target.tap();
    this.taps += 1;
    this.tapsBy.set(this.at, (this.tapsBy.get(this.at) ?? 0) + 1);
  }

  /** Presses the main action and waits until the screen has moved on, which it does only after the record. */
  async press(look: Look): Promise<void> {
    await this.touch(this.bottom(look.main));
    await this.moved(look);
  }

  /** The end of a phase: the author holds the block at the bottom until it is signed. */
  private async signWork(look: Look): Promise<void> {
    await this.hold(this.bottom(look.main));
    await this.moved(look);
  }

  /** Presses with a finger and holds; the page's clock runs on meanwhile. */
  private async hold(target: Locator): Promise<void> {
    await target.dispatchEvent('pointerdown', { isPrimary: true, button: 0, pointerType: 'touch' });
    await this.passTime(HOLD_MS);
    this.taps += 1;
    this.tapsBy.set(this.at, (this.tapsBy.get(this.at) ?? 0) + 1);
  }

  /** Answers what became of the action that was on the screen. */
  async answer(answer: 'Yes' | 'No' | 'Not sure'): Promise<void> {
    const before = await this.look();
    await this.touch(this.button(answer));
    await this.moved(before);
  }

  /** Lets the page's clock run on. */
  async passTime(ms: number): Promise<void> {
    await this.page.clock.fastForward(ms);
  }

  /** Another person takes the tablet; with their PIN where it is the first change of their shift. */
  async changeShift(name: string, pin?: string): Promise<void> {
    this.at = 'shift';
    await this.touch(this.page.getByRole('button', { name: /change who is working/ }));
    const sheet = this.page.getByRole('dialog');
    await this.touch(sheet.getByRole('button', { name: `${name} takes over` }));
    const own = sheet.getByRole('button', { name: IS_MY_WORK });
    if ((await own.count()) > 0) {
      await this.hold(own);
      await expect(own).toHaveCount(0);
      await this.passTime(PACE_MS);
    }
    if (pin !== undefined) await this.keyPin(pin);
    await this.touch(sheet.getByRole('button', { name: 'Take over', exact: true }));
    await expect(this.page.getByRole('dialog')).toHaveCount(0);
    await expect(this.page.getByRole('button', { name: /change who is working/ })).toContainText(name);
    await this.passTime(PACE_MS);
  }

  /** The tablet is handed to a signer, who looks, counts where asked, and signs with a PIN. */
  async sign({ name, pin, count, isOffline }: Signer): Promise<void> {
    this.at = 'hold';
    await this.press(await this.look());
    await this.touch(this.page.getByRole('radio', { name }));
    await expect(this.bottom('I looked at the vehicle')).toBeVisible();
    await this.press(await this.look());
    if (count !== undefined) {
      await this.keyNumber(String(count));
      await this.press(await this.look());
    }
    await this.keyPin(pin);
    if (isOffline) {
      await this.touch(this.bottom('Once more'));
      await this.keyPin(pin);
    }
    await this.press(await this.look());
  }

  /** The main action once it can be pressed. */
  bottom(name: string): Locator {
    return this.page.getByRole('contentinfo').getByRole('button', { name, exact: true });
  }

  /** Waits until the screen shows something else and takes touches again; a refusal ends the test. */
  async moved(before: Look): Promise<void> {
    await this.page.waitForFunction(readScreen, { before });
    await this.passTime(PACE_MS);
    const { refusal } = await this.look();
    if (refusal !== '') throw new Error(`Not recorded: ${refusal}`);
  }

  private button(name: string): Locator {
    return this.page.getByRole('button', { name, exact: true });
  }

  /** The first tool that may be used, in hand. */
  private async takeTool(look: Look): Promise<void> {
    await this.touch(this.page.getByRole('group', { name: 'Tools that fit' }).getByRole('radio').first());
    await expect(this.bottom(look.main)).toHaveCount(0);
    await this.passTime(PACE_MS);
  }

  /** The old shells all look alike. */
  private async gradeShells(): Promise<void> {
    await this.touch(this.button('1 fine lines'));
    await this.touch(this.page.getByRole('button', { name: /^All \d+: fine lines$/ }));
    await this.passTime(PACE_MS);
  }

  private async photograph(): Promise<void> {
    this.photographs += 1;
    const asked = this.page.waitForEvent('filechooser');
    await this.touch(this.bottom('Take the photograph'));
    const chooser = await asked;
    await chooser.setFiles({
      name: `photograph-${this.photographs}.jpg`,
      mimeType: 'image/jpeg',
      buffer: await this.picture(this.photographs),
    });
    await expect(this.bottom('Keep the photograph')).toBeVisible();
  }

  /** Picks the lot that the kit check knows, else scans the label; a scanner types it and ends with Enter. */
  private async giveLot(look: Look): Promise<void> {
    const half = /lot of the (upper|lower) shell/.exec(look.words)?.[1];
    if (half !== undefined) return this.touch(this.button(`Lot of the ${half} shell`));
    const known = this.page.getByRole('group', { name: /^Lot of/ }).getByRole('radio');
    if ((await known.count()) > 0) return this.touch(known.first());
    this.scans += 1;
    await this.page.keyboard.type(lotOn(look.heading));
    await this.page.keyboard.press('Enter');
    await this.moved(look);
  }

  /** The vehicle was moved a little in the yard, and driven a little further than asked: the third of them. */
  private readOdometer(): Promise<void> {
    return this.touch(
      this.page
        .getByRole('group', { name: /^Odometer/ })
        .getByRole('radio')
        .nth(2),
    );
  }

  private async keyIn({ words }: Look): Promise<void> {
    const asSheetSays = this.page.getByRole('button', { name: /as the sheet says$/ });
    if ((await asSheetSays.count()) > 0) return this.touch(asSheetSays);
    const asked = this.page.getByRole('textbox');
    const label = await asked.evaluate((input: HTMLInputElement) => input.labels?.[0]?.textContent ?? '');
    const [, value] = READINGS.find(([pattern]) => pattern.test(label)) ?? [];
    if (value === undefined) throw new Error(`No gauge shows “${label}” (${words}).`);
    await this.keyNumber(value);
  }

  private async keyNumber(value: string): Promise<void> {
    const keys = this.page.getByRole('group', { name: 'Number keys' });
    for (const key of value) {
      await this.touch(keys.getByRole('button', { name: key === '.' ? 'decimal point' : key, exact: true }));
    }
  }

  private keyPin(pin: string): Promise<void> {
    return this.keyNumber(pin);
  }
}

/** The label on a part's packet: another for every part, the same for the same one. */
function lotOn(part: string): string {
  let sum = 17;
  for (const letter of part) sum = (sum * 31 + (letter.codePointAt(0) ?? 0)) % 90_000;
  return `L${10_000 + sum}`;
}

/** A screen by what is done on it, for the count of touches. */
function kindOf({ heading, main, sheet }: Look): string {
  if (sheet !== undefined || main.startsWith('Choose the')) return 'tool';
  if (/^Next|^Go on/.test(main)) return 'next';
  if (/photograph/i.test(main)) return 'photograph';
  if (/tighten to|then to|turn through|release|paint the|was it/.test(heading)) return 'tightening';
  if (/, (front|rear)$/.test(heading)) return 'gauge';
  return 'step';
}

/** Reads the screen inside the page; null while it still shows what was there before, or takes no touches yet. */
function readScreen({ before, mustBeReady = false }: { before?: Look; mustBeReady?: boolean }): Look | null {
  const text = (element: Element | null | undefined) =>
    (element?.textContent ?? '').replaceAll(/\s+/g, ' ').trim();
  // A screen whose code is still coming shows its quiet buttons first; they are never the main action.
  const isMain = (button: Element) => button.closest('.floor-quiet') === null;
  const main = [...document.querySelectorAll('footer button')].filter(isMain).at(-1);
  const named = (attribute: string) => text(document.getElementById(main?.getAttribute(attribute) ?? ''));
  const isBusy = main?.getAttribute('aria-busy') === 'true';
  const sheet = document.querySelector('dialog[open]');
  const look: Look = {
    heading: text(document.querySelector('main h1')),
    done: text(document.querySelector('main .floor-done')),
    main: named('aria-labelledby'),
    words: named('aria-describedby'),
    isBarred: main?.getAttribute('aria-disabled') === 'true' && !isBusy,
    refusal: text(document.querySelector('main [role="alert"]')),
    sheet: sheet ? text(sheet.querySelector('h2')) : undefined,
  };
  if (mustBeReady && (isBusy || main === undefined)) return null;
  const isSame =
    before !== undefined &&
    look.refusal === '' &&
    look.heading === before.heading &&
    look.done === before.done &&
    look.main === before.main;
  return isSame ? null : look;
}
