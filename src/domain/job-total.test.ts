import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Entry, EntryData, Recorded } from '@/domain/entry';
import { parseEntry } from '@/domain/entry';
import { wordsOf } from '@/domain/entry-words';
import {
  applyEntry,
  emptyJob,
  evidenceFor,
  mayRecord,
  nextSteps,
  nextTightening,
  progressOf,
  whyNot,
} from '@/domain/job';
import type { JobState, Workshop } from '@/domain/job-state';
import { entryForAction } from '@/domain/job-tightening';
import { contentOf } from '@/domain/trail';
import { anyEntry, nearly } from '../../tests/support/entries-at-random';
import { buildWorkshop, Journal, torqueTool } from '../../tests/support/journal';
import { smallPlan } from '../../tests/support/small-documents';

/*
 * Nothing that the schemas let in may trip the rules up: on a tablet that would stop the job, and on the server
 * the entry would wait for ever.
 */

const workshop: Workshop = buildWorkshop();

/** The job before each of its entries, and at its end. */
function wholeJob(): { states: JobState[]; entries: Entry[] } {
  const { plan, entries: made } = new Journal(smallPlan()).performUntil(null);
  const entries = made.map((entry) => contentOf(entry) as Entry);
  const states = [emptyJob(plan)];
  for (const entry of made) states.push(applyEntry(states.at(-1) ?? emptyJob(plan), entry));
  return { states, entries };
}

const { states, entries: inOrder } = wholeJob();

function stateAt(index: number): JobState {
  const state = states[index];
  if (state === undefined) throw new RangeError(`There is no state ${index}.`);
  return state;
}

/** Everything that a screen or the server asks of a state. */
function askAll(state: JobState): void {
  for (const step of state.plan.steps) {
    whyNot(state, step.id);
    if (step.kind === 'tighten') nextTightening(state, step);
    if (step.kind === 'hold') evidenceFor(state, step.id);
  }
  nextSteps(state);
  progressOf(state);
}

function recorded(entry: Entry, conflict: boolean): Recorded {
  return {
    ...entry,
    seq: 1000,
    recordedAt: entry.at,
    prev: '0'.repeat(64),
    clockOffsetMs: 0,
    ...(conflict ? { conflict: { code: 'order', why: 'Something else came first.' } } : {}),
  };
}

/** How often each property is tried; set FUZZ to look further. */
const RUNS = Number(process.env.FUZZ ?? 400);

/** The number of a state, a few entries that come then, and whether they come with a conflict. */
const runs = fc.oneof(
  ...states.flatMap((state, at) => {
    if (at % 9 !== 0) return [];
    const entry = anyEntry(state, workshop);
    return [fc.tuple(fc.constant(at), fc.array(entry, { minLength: 1, maxLength: 4 }), fc.boolean())];
  }),
);

/** The same with the entry that was in order then, but for one thing. */
const nearRuns = fc.oneof(
  ...inOrder.flatMap((entry, at) => {
    const near = nearly(entry, stateAt(at), workshop);
    return [fc.tuple(fc.constant(at), fc.array(near, { minLength: 1, maxLength: 2 }), fc.boolean())];
  }),
);

const either = fc.oneof(runs, nearRuns);

describe('an entry of any form that its schema takes', () => {
  it('is made by the generator of these tests, which else would prove nothing', () => {
    fc.assert(
      fc.property(either, ([, entries]) => {
        for (const entry of entries) expect(parseEntry(entry)).toMatchObject({ ok: true });
      }),
      { numRuns: RUNS },
    );
  });

  it('is judged in every state of a job without an error', () => {
    fc.assert(
      fc.property(either, ([at, entries]) => {
        for (const entry of entries) mayRecord(stateAt(at), entry, workshop);
      }),
      { numRuns: RUNS },
    );
  });

  it('is folded without an error, one after another, and the state answers whatever is asked of it', () => {
    fc.assert(
      fc.property(either, ([at, entries, conflict]) => {
        askAll(entries.reduce((next, entry) => applyEntry(next, recorded(entry, conflict)), stateAt(at)));
      }),
      { numRuns: RUNS },
    );
  });

  it('that may be recorded leads to a state in which the next one is judged without an error', () => {
    fc.assert(
      fc.property(either, ([at, entries]) => {
        let next = stateAt(at);
        for (const entry of entries) {
          if (mayRecord(next, entry, workshop).ok) next = applyEntry(next, entry);
        }
        askAll(next);
      }),
      { numRuns: RUNS },
    );
  });

  it('is said in words', () => {
    fc.assert(
      fc.property(either, ([at, entries]) => {
        for (const entry of entries) expect(wordsOf(entry, stateAt(at).plan)).not.toBe('');
      }),
      { numRuns: RUNS },
    );
  });
});

describe('a figure that nothing can have', () => {
  const gauge = 'strip.gauge@rod2';
  const squeeze = 'strip.squeeze@rod2';
  const reading = {
    end: 'front',
    by: 'band',
    clearance: '0.048',
    uncertainty: '0.005',
    unit: 'mm',
    again: 'first',
    threadLot: 'G-1',
    cardLot: 'G-1',
  } as const;

  it.each([{ clearance: '-0.048' }, { clearance: '0' }, { uncertainty: '-0.005' }])(
    'is refused as it is read: %o',
    (over) => {
      const journal = new Journal(smallPlan()).performUntil(gauge);
      expect(journal.ask('gauged', { ...reading, ...over }, { step: gauge })).toMatchObject({
        code: 'impossible',
      });
    },
  );

  it('does not come in by a correction either', () => {
    const journal = new Journal(smallPlan()).performUntil(squeeze);
    const torque = journal.record('tightened', tightenedData(journal, squeeze), { step: squeeze });
    journal.performUntil(gauge);
    const { id } = journal.record('gauged', reading, { step: gauge });
    const wrong = [
      { of: id, data: { ...reading, uncertainty: '-0.005' } },
      { of: id, data: { ...reading, clearance: '-0.048' } },
      { of: torque.id, data: { ...torque.data, value: '-3' } },
    ];
    for (const one of wrong) {
      const correction = { ...one, class: 'substantive', reason: 'misread' } as const;
      expect(journal.ask('corrected', correction)).toMatchObject({ code: 'impossible' });
    }
  });
});

function tightenedData(journal: Journal, stepId: string): EntryData<'tightened'> {
  const step = journal.step(stepId);
  const action = step.kind === 'tighten' ? nextTightening(journal.state, step) : null;
  const draft = step.kind === 'tighten' && action ? entryForAction(journal.state, step, action) : undefined;
  if (draft?.kind !== 'tightened') throw new Error(`${stepId} has no tightening next`);
  return { ...draft.data, tool: torqueTool };
}
