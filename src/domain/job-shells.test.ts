import { describe, expect, it } from 'vitest';
import { Journal } from '../../tests/support/journal';
import { smallPlan } from '../../tests/support/small-documents';
import { predictionWords } from './job-prediction';
import { clearanceOfRod, expectedClearance, fullShelf, proposeShells, shellsOnShelf } from './job-shells';
import { exactToNumber } from './decimal';
import type { JobState } from './job-state';

const gauge = (rod: number) => `strip.gauge@rod${rod}`;
const choose = (rod: number) => `strip.choose@rod${rod}`;
const pair = (upper: string, lower = upper) => ({
  upper: { grade: upper, lot: 'S-1' },
  lower: { grade: lower, lot: 'S-1' },
});
const shelf = (red: number, blue: number, black: number) =>
  Object.entries({ red, blue, black }).map(([grade, count]) => ({ grade, half: 'either' as const, count }));

/** A job in which a rod was read outside its limits and goes back to its shells. */
function reworked(rod: number, front: string, rear = front): Journal {
  const journal = new Journal(smallPlan()).performUntil(gauge(rod));
  journal.gaugeEnd(gauge(rod), 'front', front, { uncertainty: '0.001' });
  journal.gaugeEnd(gauge(rod), 'rear', rear, { uncertainty: '0.001' });
  for (const { id } of journal.state.deviations.filter(({ disposed }) => !disposed))
    journal.record(
      'deviation-disposed',
      { deviation: id, disposition: 'rework', reason: 'other shells' },
      { by: 'sup' },
    );
  expect(journal.status(choose(rod))).toBe('open');
  return journal;
}

function known(state: JobState, rod: number): number | undefined {
  const found = clearanceOfRod(state, rod);
  return found && exactToNumber(found.clearance);
}

describe('the clearance to reckon with', () => {
  it('is not known before a rod was read', () => {
    const journal = new Journal(smallPlan()).performUntil(gauge(2));
    expect(known(journal.state, 2)).toBeUndefined();
    expect(proposeShells(journal.state, 2, fullShelf(journal.state))).toBeUndefined();
  });

  it('is the middle of both ends', () => {
    const journal = new Journal(smallPlan()).performUntil(gauge(2)).gauge(gauge(2), '0.049', '0.052');
    expect(known(journal.state, 2)).toBe(0.0505);
  });

  it('is carried over to the shells that are in the rod now, however often they are changed before it is read', () => {
    const journal = reworked(2, '0.080');
    expect(known(journal.state, 2)).toBe(0.08);
    journal.record('chose-shells', pair('black'), { step: choose(2) });
    expect(known(journal.state, 2)).toBe(0.072);
    journal.record('chose-shells', pair('red', 'black'), { step: choose(2) });
    expect(known(journal.state, 2)).toBe(0.08);
    const rod = clearanceOfRod(journal.state, 2)!;
    expect(expectedClearance(journal.state, rod, { upper: 'black', lower: 'black' })).toBe('0.072');
  });
});

describe('what lies on the shelf', () => {
  it('is not known before it was counted', () => {
    expect(shellsOnShelf(reworked(2, '0.080').state)).toBeUndefined();
  });

  it('is the last count, less what was taken and with what came back', () => {
    const journal = reworked(2, '0.080');
    journal.record('chose-shells', { ...pair('black'), stock: shelf(2, 3, 4) }, { step: choose(2) });
    expect(shellsOnShelf(journal.state)).toEqual(shelf(2, 5, 2));
    journal.performUntil(choose(1)).perform(choose(1));
    // The first shells of rods 3 and 1, all blue
    expect(shellsOnShelf(journal.state)).toEqual(shelf(2, 1, 2));
    const reason = 'scratched';
    journal.record('chose-shells', { ...pair('red', 'blue'), reason }, { step: choose(1) });
    expect(shellsOnShelf(journal.state)).toEqual(shelf(1, 2, 2));
    journal.record('chose-shells', { ...pair('red'), stock: shelf(9, 9, 9), reason }, { step: choose(1) });
    expect(shellsOnShelf(journal.state)).toEqual(shelf(8, 10, 9));
  });

  it('does not count what was taken back, and never falls below nothing', () => {
    const journal = reworked(2, '0.080');
    const taken = journal.record(
      'chose-shells',
      { ...pair('black'), stock: shelf(0, 0, 1) },
      { step: choose(2) },
    );
    expect(shellsOnShelf(journal.state)).toEqual(shelf(0, 2, 0));
    journal.record(
      'taken-back',
      { of: taken.id, which: 'touched by mistake, not done' },
      { step: choose(2) },
    );
    expect(shellsOnShelf(journal.state)).toBeUndefined();
  });
});

describe('what is proposed', () => {
  it('is the best for all rods measured and not fitted for good, with the reasons', () => {
    const journal = reworked(2, '0.072');
    const proposal = proposeShells(journal.state, 2, fullShelf(journal.state));
    expect(proposal?.shells).toEqual({ rod: 2, upper: 'black', lower: 'black', predicted: 0.064 });
    expect(proposal?.why[0]).toMatch(/^(Every|The) rod is predicted within 0\.016 of 0\.048/);
    expect(proposal?.why).toContain('Blue would be 0.068, further from 0.048.');
  });

  it('takes no more than lies on the shelf', () => {
    const journal = reworked(2, '0.072');
    expect(proposeShells(journal.state, 2, shelf(0, 0, 1))?.shells).toMatchObject({ predicted: 0.068 });
    expect(proposeShells(journal.state, 2, shelf(0, 0, 0))).toMatchObject({
      shells: undefined,
      why: [expect.stringContaining('is not in stock')],
    });
  });

  it('is made for the rod alone where another one bars the choice for all', () => {
    const journal = new Journal(smallPlan()).performUntil(gauge(2)).gauge(gauge(2), '0.095', '0.095');
    const state = journal.state;
    const other: JobState = {
      ...state,
      rods: { ...state.rods, 1: { ...state.rods[2]!, rod: 1, ...readAt(state, '0.056') } },
    };
    const proposal = proposeShells(other, 1, fullShelf(state));
    expect(proposal?.shells).toMatchObject({ rod: 1, upper: 'black', lower: 'black', predicted: 0.048 });
    expect(proposal?.why.at(-1)).toMatch(
      /^Not for all measured rods together\. Rod 2: no grades bring it between/,
    );
  });
});

function readAt(state: JobState, clearance: string) {
  const { front, rear } = state.rods[2]!;
  return { front: { ...front!, clearance }, rear: { ...rear!, clearance } };
}

describe('a choice other than the proposal', () => {
  const proposed = { upper: 'black', lower: 'black' };

  it('is refused without a reason and taken with one', () => {
    const journal = reworked(2, '0.080');
    const on = { step: choose(2) };
    const other = { ...pair('black', 'blue'), proposed };
    expect(journal.ask('chose-shells', other, on)).toEqual({
      ok: false,
      code: 'reason-missing',
      why: 'Other shells were proposed for this rod.',
      unlock: 'Say why these were taken.',
    });
    expect(journal.ask('chose-shells', { ...other, reason: 'not on the shelf' }, on)).toEqual({ ok: true });
    expect(journal.ask('chose-shells', { ...pair('black'), proposed }, on)).toEqual({ ok: true });
  });

  it('asks for nothing where nothing was proposed, as in entries of earlier versions', () => {
    expect(reworked(2, '0.080').ask('chose-shells', pair('black', 'blue'), { step: choose(2) })).toEqual({
      ok: true,
    });
  });
});

describe('measured beside predicted', () => {
  const reading = (clearance: string) => ({
    ...{ entry: 'e', end: 'front' as const, clearance, uncertainty: '0.002', verdict: 'inside' as const },
    ...{ place: 0.5, at: '2031-01-01T00:00:00Z' },
  });
  const rod = (predicted: string | undefined, front: string, rear: string) => ({
    ...{ rod: 1, cap: 'on' as const, shells: 'oiled' as const, thread: 'none' as const, voidReadings: [] },
    ...{ predicted, front: reading(front), rear: reading(rear) },
  });

  it('says by how much they differ, and which way', () => {
    expect(predictionWords(rod('0.046', '0.047', '0.049'))).toBe(
      'predicted 0.046, measured 0.048, 0.002 wider',
    );
    expect(predictionWords(rod('0.050', '0.047', '0.048'))).toBe(
      'predicted 0.050, measured 0.0475, 0.0025 tighter',
    );
    expect(predictionWords(rod('0.048', '0.048', '0.048'))).toBe(
      'predicted 0.048, measured 0.048, as predicted',
    );
  });

  it('says nothing before both are known', () => {
    expect(predictionWords(rod(undefined, '0.047', '0.049'))).toBeUndefined();
    expect(predictionWords({ ...rod('0.046', '0.047', '0.049'), rear: undefined })).toBeUndefined();
  });
});
