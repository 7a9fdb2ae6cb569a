import type { Entry, EntryData, EntryOf } from './entry';
import { whyImpossible } from './job-figures';
import { nextTightening, startsAgain, tighteningsLeft } from './job-tightening';
import type { JobState, Verdict, Workshop } from './job-state';
import type { PlanStage, StepOf } from './plan';
import { dayIn } from './time-words';
import { judgeReading } from './tightening';
import { fitness } from './tool';

const OK: Verdict = { ok: true };

function no(code: string, why: string, unlock?: string): Verdict {
  return { ok: false, code, why, ...(unlock === undefined ? {} : { unlock }) };
}

/** The programme in order, never past a bolt's tightenings, never with a tool that isn't fit for class A. */
export function whyNotTighten(
  state: JobState,
  step: StepOf<'tighten'>,
  entry: Entry,
  workshop: Workshop,
): Verdict {
  if (state.steps[step.id]?.status === 'done' && entry.kind !== 'photographed') {
    return no('already-done', `"${step.title}" is done.`, 'Take back the last act first if it was wrong.');
  }
  const next = nextTightening(state, step);
  if (!next) return no('already-done', `"${step.title}" is done.`);
  if (entry.kind === 'started-again') return whyNotStartedAgain(step, entry);
  if (entry.kind === 'bolt-replaced') return whyNotReplaced(state, step, entry.data.bolt);
  if (entry.kind === 'released' && next.kind === 'release') {
    return next.bolt === entry.data.bolt ? OK : no('order', `Bolt ${next.bolt} is released first.`);
  }
  if (entry.kind !== 'tightened' && entry.kind !== 'released' && entry.kind !== 'marked') return OK;
  if (next.kind !== 'stage') {
    const what =
      next.kind === 'replace'
        ? `Bolt ${next.bolt} is replaced first.`
        : `Bolt ${next.bolt} is released first.`;
    return no('order', what, 'The cap starts again at the first cycle after that.');
  }
  const { bolt, cycle, stage } = entry.data;
  if (next.bolt !== bolt || next.cycle !== cycle || next.stage !== stage) {
    return no(
      'order',
      `Next is bolt ${next.bolt}, cycle ${next.cycle + 1}, pass ${next.stage + 1}.`,
      'Go on from there.',
    );
  }
  const planned = state.plan.programmes[step.programme]?.cycles[cycle]?.[stage];
  const kind = whyNotStage(planned, entry);
  if (!kind.ok) return kind;
  const left = whyNotStart(state, step);
  if (!left.ok) return left;
  return entry.kind === 'tightened' ? whyNotTool(step, entry.data, entry.at, workshop) : OK;
}

/** A bolt is replaced when it was turned too far, or when it can't last through the programme again. */
function whyNotReplaced(state: JobState, step: StepOf<'tighten'>, bolt: string): Verdict {
  const next = nextTightening(state, step);
  if (next?.kind === 'replace' && next.bolt === bolt) return OK;
  const isWorn = step.bolts.includes(bolt) && tighteningsLeft(state, step, bolt) < cyclesOf(state, step);
  return isWorn && startsAgain(state, step) ? OK : no('order', `Bolt ${bolt} is not waiting to be replaced.`);
}

function cyclesOf(state: JobState, step: StepOf<'tighten'>): number {
  return state.plan.programmes[step.programme]?.cycles.length ?? 0;
}

function whyNotStartedAgain(step: StepOf<'tighten'>, entry: EntryOf<'started-again'>): Verdict {
  const missing = step.bolts.find((bolt) => !entry.data.bolts.includes(bolt));
  return missing === undefined
    ? OK
    : no('order', `Bolt ${missing} must be let off too.`, 'Release every bolt of the cap.');
}

function whyNotStage(
  planned: PlanStage | undefined,
  entry: EntryOf<'tightened'> | EntryOf<'released'> | EntryOf<'marked'>,
): Verdict {
  if (entry.kind === 'released')
    return planned?.kind === 'release' ? OK : no('order', 'Nothing is released here.');
  if (entry.kind === 'marked') return planned?.kind === 'mark' ? OK : no('order', 'No mark is due here.');
  const { target } = entry.data;
  if (planned?.kind !== 'torque' && planned?.kind !== 'angle')
    return no('order', 'No torque or angle is due here.');
  if (
    target.kind !== planned.kind ||
    target.target !== planned.target ||
    target.tolerance !== planned.tolerance
  ) {
    return no('target-differs', 'The target is not the one of the plan.');
  }
  const possible = whyImpossible(entry.kind, entry.data);
  return possible.ok ? whyNotOutcome(planned, entry.data) : possible;
}

/** A value that was read says itself what came of the pass. */
export function whyNotOutcome(
  planned: Extract<PlanStage, { target: string }>,
  { value, outcome }: EntryData<'tightened'>,
): Verdict {
  if (value === undefined) return OK;
  const spec = { kind: planned.kind, target: Number(planned.target), tolerance: Number(planned.tolerance) };
  const judged = judgeReading(spec, Number(value));
  const said = outcome === 'done' ? 'ok' : outcome === 'over' ? 'over' : 'under';
  return judged === said
    ? OK
    : no('outcome-differs', `${value} against ${planned.target} ± ${planned.tolerance} is ${judged}.`);
}

/** Checked for the whole programme before it starts, and again wherever the cap starts again. */
export function whyNotStart(state: JobState, step: StepOf<'tighten'>): Verdict {
  if (!startsAgain(state, step)) return OK;
  const cycles = cyclesOf(state, step);
  const short = step.bolts.find((bolt) => tighteningsLeft(state, step, bolt) < cycles);
  return short === undefined
    ? OK
    : no(
        'tightenings-used',
        `Bolt ${short} has ${tighteningsLeft(state, step, short)} tightenings left and the programme needs ${cycles}.`,
        `Replace bolt ${short}, or raise a deviation.`,
      );
}

/** The tool of a class A pass: known, of the right kind, in range, and in date on the day of the pass. */
export function whyNotTool(
  step: StepOf<'tighten'>,
  { tool: used, target }: EntryData<'tightened'>,
  at: string,
  workshop: Workshop,
): Verdict {
  if (step.class !== 'A') return OK;
  if (!used) return no('tool-missing', 'A class A step names its tool.', 'Choose the tool in hand.');
  const tool = workshop.tools.find(({ id }) => id === used.id);
  if (!tool) return no('unknown-tool', 'The workshop does not know this tool.', 'Choose another tool.');
  const isAngle = target.kind === 'angle';
  const { fit, reasons } = fitness(
    tool,
    {
      kind: isAngle ? 'angle gauge' : 'torque wrench',
      criticalClass: 'A',
      ...(isAngle ? {} : { value: Number(target.target), unit: 'N·m' }),
    },
    dayIn(workshop.zone, at),
  );
  return fit ? OK : no('tool-unfit', `${tool.name}: ${reasons.join('; ')}.`, 'Choose another tool.');
}
