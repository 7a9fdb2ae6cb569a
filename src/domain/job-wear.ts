/*
 * The old shells of a job as they were graded side by side: what may be recorded of them, what a worn one opens,
 * and what the record says of them. The patterns are read in wear.ts.
 */
import type { EntryData } from './entry';
import { raiseDeviation } from './job-deviation';
import { asGround, lastOf } from './job-kept';
import type { JobState, Kept, Verdict } from './job-state';
import { rodsOf, type Plan, type ShellHalf, type StepOf } from './plan';
import type { GradedShell, WearGrade } from './wear';
import { lookWords, shellName } from './wear-words';

/** Where an old shell lay. */
export interface ShellPlace {
  rod: number;
  half: ShellHalf;
}

/** The rule that opens a deviation on worn old shells. */
export const WORN_SHELLS = 'worn-shells';

/** From this grade on the pin of the shell is looked at too. */
const ASKS_FOR_PIN: WearGrade = 3;

const SINCE_CORRECTED = ' (since corrected)';

/** Every old shell of the engine in the order of the bench: front first, the upper before the lower. */
export function oldShells(plan: Plan): ShellPlace[] {
  return rodsOf(plan).flatMap((rod) => [
    { rod, half: 'U' as const },
    { rod, half: 'L' as const },
  ]);
}

/** Whether the supervisor looks at the pin of this shell. */
export function isWorn({ grade, flags }: GradedShell): boolean {
  return grade >= ASKS_FOR_PIN || flags.length > 0;
}

/** Why these are not the old shells of the engine, each graded once. */
export function whyNotGraded({ plan }: Pick<JobState, 'plan'>, { shells }: EntryData<'graded'>): Verdict {
  const asked = oldShells(plan).map(shellName);
  const named = shells.map(shellName);
  const strange = named.find((name) => !asked.includes(name));
  if (strange !== undefined) return no('unknown-shell', `The engine has no shell ${strange}.`);
  const twice = named.find((name, i) => named.indexOf(name) !== i);
  if (twice !== undefined) return no('graded-twice', `Shell ${twice} is graded twice.`);
  const missing = asked.find((name) => !named.includes(name));
  if (missing !== undefined)
    return no('not-graded', `Shell ${missing} has no grade.`, 'Grade every old shell.');
  const repeats = shells.find(({ flags }) => new Set(flags).size !== flags.length);
  return repeats === undefined
    ? { ok: true }
    : no('flag-twice', `A sign is named twice on shell ${shellName(repeats)}.`);
}

function no(code: string, why: string, unlock = 'Look at the shells and record them again.'): Verdict {
  return { ok: false, code, why, unlock };
}

/** Worn shells open one deviation for all of them, which blocks nothing: the supervisor looks at their pins. */
export function settleGraded(state: JobState, step: StepOf<'grade-shells'>): JobState {
  const kept = lastOf(state.steps[step.id], 'graded');
  if (!kept) return state;
  const next = kept.valueFrom === undefined ? state : noteCorrected(state, step.id, kept);
  const worn = kept.data.shells.filter(isWorn);
  if (worn.length === 0) return next;
  const rods = new Set(worn.map(({ rod }) => rod));
  return raiseDeviation(next, asGround(kept), {
    rule: WORN_SHELLS,
    class: 'B',
    words: `Old shells to look at, with their pins: ${worn.map((shell) => `${shellName(shell)} ${lookWords(shell)}`).join('; ')}`,
    blocks: false,
    ...(rods.size === 1 ? { rod: worn[0]?.rod } : {}),
  });
}

/** What the earlier grades opened stays for the supervisor, and says that they were corrected. */
function noteCorrected(state: JobState, step: string, kept: Kept): JobState {
  const present = `${asGround(kept).id}:${WORN_SHELLS}`;
  const deviations = state.deviations.map((one) =>
    one.rule === WORN_SHELLS &&
    one.step === step &&
    one.id !== present &&
    !one.disposed &&
    !one.words.endsWith(SINCE_CORRECTED)
      ? { ...one, words: `${one.words}${SINCE_CORRECTED}` }
      : one,
  );
  return { ...state, deviations };
}

/** The grading that counts, with its shells in the order of the bench; undefined where none were graded. */
export function gradedShells(state: JobState): { kept: Kept; shells: GradedShell[] } | undefined {
  const kept = state.plan.steps
    .flatMap((step) => (step.kind === 'grade-shells' ? (lastOf(state.steps[step.id], 'graded') ?? []) : []))
    .at(-1);
  if (!kept) return undefined;
  // A record that is not in order may hold a shell twice or none of the engine's: the last of each counts.
  const shells = oldShells(state.plan).flatMap(
    ({ rod, half }) => kept.data.shells.findLast((one) => one.rod === rod && one.half === half) ?? [],
  );
  return shells.length === 0 ? undefined : { kept, shells };
}
