/* What a correction may say of the act that it corrects: its value, never another bolt, end, check or unit. */
import { isSameData } from './correction-class';
import type { EntryData } from './entry';
import { whyImpossible } from './job-figures';
import type { JobState, Kept, Verdict, Workshop } from './job-state';
import { whyNotOutcome, whyNotTool } from './job-tightening-rules';
import { activeEntries } from './job-kept';
import { whyNotGraded } from './job-wear';
import type { PlanStep } from './plan';

const OK: Verdict = { ok: true };

function no(code: string, why: string, unlock?: string): Verdict {
  return { ok: false, code, why, ...(unlock === undefined ? {} : { unlock }) };
}

/** Why this can't stand in the place of what was recorded; `data` has the form of its kind. */
export function whyNotInItsPlace(
  state: JobState,
  step: PlanStep | undefined,
  kept: Kept,
  data: object,
  workshop: Workshop,
): Verdict {
  const possible = whyImpossible(kept.kind, data);
  if (!possible.ok) return possible;
  switch (kept.kind) {
    case 'tightened':
      return whyNotTightened(state, step, kept, data as EntryData<'tightened'>, workshop);
    case 'gauged':
      return whyOther(kept, data, ['end', 'again'], 'reading of another end');
    case 'chose-shells':
      return whyNotGrades(state, data as EntryData<'chose-shells'>);
    case 'graded':
      return whyNotGraded(state, data as EntryData<'graded'>);
    case 'read':
    case 'filled':
      return whyOther(kept, data, ['unit'], 'unit');
    case 'watch-checked':
      return whyOther(kept, data, ['check'], 'check');
    case 'bolt-replaced':
      return whyOther(kept, data, ['bolt'], 'bolt');
    case 'inspected':
      return whyNotSameChecks(kept, data as EntryData<'inspected'>);
    case 'fitted':
    case 'refitted':
      return whyNotWithoutLot(kept, data);
    case 'drive-started':
    case 'drive-ended':
      return whyNotDriven(state, kept, data as EntryData<'drive-ended'>);
    default:
      return OK;
  }
}

/** These fields say which act it was; an act that was another one is taken back. */
function whyOther(kept: Kept, data: object, names: readonly string[], what: string): Verdict {
  const before: Record<string, unknown> = { ...kept.data };
  const after: Record<string, unknown> = { ...data };
  return names.every((name) => isSameData(before[name], after[name]))
    ? OK
    : no('other-act', `A correction does not make this another ${what}.`, 'Take it back and record it anew.');
}

function whyNotTightened(
  state: JobState,
  step: PlanStep | undefined,
  kept: Kept,
  data: EntryData<'tightened'>,
  workshop: Workshop,
): Verdict {
  const other = whyOther(kept, data, ['bolt', 'cycle', 'stage', 'target'], 'bolt or pass');
  if (!other.ok || step?.kind !== 'tighten') return other;
  const planned = state.plan.programmes[step.programme]?.cycles[data.cycle]?.[data.stage];
  if (planned?.kind !== 'torque' && planned?.kind !== 'angle') return OK;
  const outcome = whyNotOutcome(planned, data);
  const isSameTool = isSameData((kept.data as EntryData<'tightened'>).tool, data.tool);
  // The tool was judged when it was used; only another one is judged now, by that day.
  return outcome.ok && !isSameTool ? whyNotTool(step, data, kept.at, workshop) : outcome;
}

/** A grade that the sheet doesn't know can't have been fitted. */
export function whyNotGrades(state: JobState, { upper, lower }: EntryData<'chose-shells'>): Verdict {
  const grades = state.plan.engine.shells.grades.map(({ grade }) => grade);
  const unknown = [upper, lower].find(({ grade }) => !grades.includes(grade));
  return unknown ? no('unknown-grade', `The engine sheet has no shell grade "${unknown.grade}".`) : OK;
}

function whyNotSameChecks(kept: Kept, { checks }: EntryData<'inspected'>): Verdict {
  const before = (kept.data as EntryData<'inspected'>).checks;
  return before.length === checks.length && before.every(({ id }, i) => checks[i]?.id === id)
    ? OK
    : no('other-act', 'A correction answers the same checks.', 'Answer all of them.');
}

function whyNotWithoutLot(kept: Kept, data: object): Verdict {
  return 'lot' in kept.data && !('lot' in data)
    ? no('lot-missing', 'Its lot is needed.', 'Key it in or pick it from the list.')
    : OK;
}

function whyNotDriven(state: JobState, kept: Kept, data: EntryData<'drive-ended'>): Verdict {
  const same = whyOther(kept, data, ['unit'], 'unit');
  if (!same.ok) return same;
  const checks = whyNotSameChecks(kept, data);
  if (!checks.ok) return checks;
  const read = (kind: Kept['kind']): number | undefined => {
    const own = kept.step === undefined ? undefined : state.steps[kept.step];
    const found = kind === kept.kind ? { data } : activeEntries(own).findLast((one) => one.kind === kind);
    return found && 'odometer' in found.data ? Number(found.data.odometer) : undefined;
  };
  const [from, to] = [read('drive-started'), read('drive-ended')];
  return from !== undefined && to !== undefined && to < from
    ? no('impossible', 'An odometer does not run backwards.', 'Read it again.')
    : OK;
}
