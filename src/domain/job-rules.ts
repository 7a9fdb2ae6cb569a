/*
 * What may be recorded, asked on the tablet before the screen moves and again on the server. Every answer
 * is in words for the person who asked. The plan's hash, signatures and PINs are the server's to check.
 */
import { whyNotAuthorisedFor } from './authorisation';
import { entryData, type Entry, type EntryKind, type EntryOf } from './entry';
import * as z from 'zod/mini';
import { whyNotTighten } from './job-tightening-rules';
import { whyNotGrades } from './job-correction-form';
import { whyNotCorrected, whyNotCountersigned, whyNotRevoked, whyNotTakenBack } from './job-correction-rules';
import { whyImpossible } from './job-figures';
import { whyNotSigned } from './job-signing-rules';
import { whyNotWorkSigned } from './job-work';
import { whyNot } from './job-order';
import type { JobState, Verdict, Workshop } from './job-state';
import { whyNotGraded } from './job-wear';
import { findStep, type PlanStep, type StepKind } from './plan';

const OK: Verdict = { ok: true };

function no(code: string, why: string, unlock?: string): Verdict {
  return { ok: false, code, why, ...(unlock === undefined ? {} : { unlock }) };
}

/** The step kinds that an entry kind belongs to; kinds that aren't here belong to any step or to none. */
const stepKinds: Partial<Record<EntryKind, StepKind[]>> = {
  done: ['do'],
  removed: ['remove'],
  refitted: ['refit'],
  placed: ['place'],
  counted: ['count'],
  inspected: ['inspect'],
  read: ['read'],
  turned: ['turn'],
  'chose-shells': ['choose-shells'],
  graded: ['grade-shells'],
  gauged: ['gauge'],
  'measuring-again': ['gauge'],
  tightened: ['tighten'],
  released: ['tighten'],
  marked: ['tighten'],
  'started-again': ['tighten'],
  'bolt-replaced': ['tighten'],
  fitted: ['fit'],
  filled: ['fill'],
  'watch-started': ['watch'],
  'watch-checked': ['watch'],
  'watch-ended': ['watch'],
  'drive-started': ['drive'],
  'drive-ended': ['drive'],
  signed: ['hold'],
  witnessed: ['witness'],
  parked: ['make-safe'],
  resumed: ['resume'],
  'handed-over': ['hand-over'],
};

/** Kinds that stay possible while a vehicle is parked or after the job has ended. */
const always = new Set<EntryKind>([
  'corrected',
  'revoked',
  'photographed',
  'took-over',
  'work-signed',
  'countersigned',
]);

/** May this entry be recorded in this state? */
export function mayRecord(state: JobState, entry: Entry, workshop: Workshop): Verdict {
  const person = workshop.people.find(({ id }) => id === entry.by);
  if (!person) return no('unknown-person', 'The workshop does not know this person.');
  if (!person.active) return no('inactive-person', `${person.name} is no longer active in this workshop.`);
  const helper = entry.with.find((id) => !workshop.people.some((p) => p.id === id && p.active));
  if (helper !== undefined) return no('unknown-person', 'The workshop does not know one of the helpers.');
  const role = whyNotRole(entry.kind, person.roles);
  if (!role.ok) return role;
  const authorised = whyNotAuthorisedFor(state, entry, person, workshop.zone);
  if (!authorised.ok) return authorised;
  if (entry.kind === 'opened')
    return state.phase === 'not opened' ? OK : no('already-opened', 'The job is open already.');
  const phase = whyNotPhase(state, entry.kind);
  if (!phase.ok) return phase;
  return whyNotOnStep(state, entry, workshop);
}

/** The roles table: who may make entries of this kind. */
function whyNotRole(kind: EntryKind, roles: string[]): Verdict {
  const may = (...allowed: string[]): Verdict =>
    allowed.some((role) => roles.includes(role))
      ? OK
      : no('role', `This needs the role ${allowed.join(' or ')}.`, 'Ask someone who has it.');
  switch (kind) {
    case 'opened':
    case 'handed-over':
    case 'ended-unfinished':
      return may('supervisor', 'owner');
    case 'signed':
    case 'countersigned':
    case 'deviation-disposed':
    case 'revoked':
    case 'plan-moved':
      return may('supervisor', 'quality lead');
    case 'photographed':
      return may('technician', 'supervisor', 'owner');
    case 'witnessed':
      return may('supervisor', 'quality lead', 'auditor', 'owner');
    case 'refused':
    case 'tablet-lost':
    case 'restored':
    case 'erased':
      return no('office-kind', 'Only the server makes this kind of entry.');
    default:
      return may('technician', 'supervisor');
  }
}

function whyNotPhase(state: JobState, kind: EntryKind): Verdict {
  if (state.phase === 'not opened') return no('not-opened', 'The job has not been opened.');
  if (state.phase === 'running' || always.has(kind)) return OK;
  if (state.phase === 'parked') {
    const isFree =
      kind === 'resumed' ||
      kind === 'deviation-raised' ||
      kind === 'deviation-disposed' ||
      kind === 'ended-unfinished';
    return isFree ? OK : no('parked', 'The vehicle is parked, made safe.', 'Resume the job first.');
  }
  return no(
    'ended',
    state.phase === 'handed over' ? 'The job is handed over.' : 'The job was ended unfinished.',
  );
}

function whyNotOnStep(state: JobState, entry: Entry, workshop: Workshop): Verdict {
  const step = entry.step === undefined ? undefined : findStep(state.plan, entry.step);
  if (entry.step !== undefined && !step)
    return no('unknown-step', 'This step is not in the plan of the job.');
  const kinds = stepKinds[entry.kind];
  if (kinds && (!step || !kinds.includes(step.kind))) {
    return no('wrong-step', `An entry "${entry.kind}" does not belong on this step.`);
  }
  switch (entry.kind) {
    case 'corrected':
      return whyNotCorrected(state, entry, workshop, isDataOf);
    case 'taken-back':
      return whyNotTakenBack(state, entry, workshop);
    case 'revoked':
      return whyNotRevoked(state, entry);
    case 'countersigned':
      return whyNotCountersigned(state, entry);
    case 'work-signed':
      return whyNotWorkSigned(state, entry);
    case 'deviation-disposed':
      return whyNotDisposed(state, entry);
    case 'not-applicable':
      return whyNotNotApplicable(state, step, entry, workshop);
    case 'waiting-for-part':
    case 'part-arrived':
      return step ? OK : no('wrong-step', 'A part is waited for at a step.');
    case 'tool-taken':
      return workshop.tools.some((tool) => tool.id === entry.data.tool.id)
        ? OK
        : no('unknown-tool', 'The workshop does not know this tool.', 'Pick another tool.');
    default:
      return step && kinds ? whyNotStepEntry(state, step, entry, workshop) : OK;
  }
}

/** Order first, then what is particular to the kind. */
function whyNotStepEntry(state: JobState, step: PlanStep, entry: Entry, workshop: Workshop): Verdict {
  const order = whyNot(state, step.id);
  if (!order.ok) return order;
  if (step.kind === 'tighten') return whyNotTighten(state, step, entry, workshop);
  const status = state.steps[step.id]?.status;
  if (status === 'not applicable')
    return no('not-applicable', `"${step.title}" was set aside as not applicable.`);
  const mayRepeat =
    entry.kind === 'chose-shells' || entry.kind === 'measuring-again' || step.onDemand === true;
  if (status === 'done' && !mayRepeat)
    return no('already-done', `"${step.title}" is done.`, 'Take it back first if it was wrong.');
  switch (entry.kind) {
    case 'signed':
      return whyNotSigned(state, step, entry, workshop);
    case 'gauged':
      return whyNotGauged(state, step, entry);
    case 'chose-shells':
      return whyNotChosen(state, step, entry);
    case 'graded':
      return whyNotGraded(state, entry.data);
    case 'watch-checked':
    case 'watch-ended':
      return whyNotWatch(state, step, entry);
    case 'drive-ended':
      return whyNotDriveEnded(state, step, entry);
    case 'inspected':
    case 'parked':
    case 'resumed':
    case 'handed-over':
      return whyNotAnswered(step, entry.data.checks);
    case 'fitted':
      return step.kind === 'fit' && step.lot && entry.data.lot === undefined
        ? no('lot-missing', `The lot of the ${step.part} is needed.`, 'Key it in or pick it from the list.')
        : OK;
    case 'refitted':
      return step.kind === 'refit' && step.part !== undefined && entry.data.lot === undefined
        ? no(
            'lot-missing',
            `The lot of the new ${step.part} is needed.`,
            'Key it in or pick it from the list.',
          )
        : OK;
    default:
      return OK;
  }
}

function whyNotAnswered(step: PlanStep, answers: { id: string }[]): Verdict {
  const asked = 'checks' in step ? step.checks : [];
  const missing = asked.find(({ id }) => !answers.some((answer) => answer.id === id));
  return missing ? no('unanswered', 'Every check needs an answer.', 'Answer all of them.') : OK;
}

function whyNotGauged(state: JobState, step: PlanStep, entry: EntryOf<'gauged'>): Verdict {
  const rod = step.rod === undefined ? undefined : state.rods[step.rod];
  const present = rod?.[entry.data.end];
  if (present && entry.data.again === 'first') {
    return no(
      'already-read',
      `The ${entry.data.end} of rod ${step.rod} is read already.`,
      'Read again, or measure again.',
    );
  }
  return whyImpossible('gauged', entry.data);
}

function whyNotChosen(state: JobState, step: PlanStep, entry: EntryOf<'chose-shells'>): Verdict {
  const grades = whyNotGrades(state, entry.data);
  if (!grades.ok) return grades;
  const rod = step.rod === undefined ? undefined : state.rods[step.rod];
  const isAfterReading = rod !== undefined && (rod.front !== undefined || rod.rear !== undefined);
  const isPast = state.plan.steps.some(
    (s) =>
      s.kind === 'tighten' && s.fit === 'final' && s.rod === step.rod && state.steps[s.id]?.status !== 'open',
  );
  if (isPast) return no('already-fitted', 'This rod has its final fit.', 'Raise a deviation.');
  if (isAfterReading && entry.data.reason === undefined) {
    return no('reason-missing', 'Other shells void the reading of this rod.', 'Give the reason.');
  }
  if (!isAsProposed(entry.data) && entry.data.reason === undefined) {
    return no('reason-missing', 'Other shells were proposed for this rod.', 'Say why these were taken.');
  }
  return OK;
}

function isAsProposed({ upper, lower, proposed }: EntryOf<'chose-shells'>['data']): boolean {
  return proposed === undefined || (proposed.upper === upper.grade && proposed.lower === lower.grade);
}

function whyNotWatch(
  state: JobState,
  step: PlanStep,
  entry: EntryOf<'watch-checked'> | EntryOf<'watch-ended'>,
): Verdict {
  if (step.kind !== 'watch') return OK;
  if (state.watch?.step !== step.id) return no('not-started', 'The watch has not been started.', 'Start it.');
  if (entry.kind === 'watch-checked') {
    return step.checks.some(({ id }) => id === entry.data.check)
      ? OK
      : no('unknown-check', 'This check is not in the plan.');
  }
  if (entry.data.early)
    return entry.data.reason === undefined ? no('reason-missing', 'Ending early needs a reason.') : OK;
  const minutes = (Date.parse(entry.at) - Date.parse(state.watch.startedAt)) / 60_000;
  if (minutes < Number(step.minutes)) {
    return no(
      'too-early',
      `The watch lasts ${step.minutes} minutes.`,
      'Wait for its end, or end it early with a reason.',
    );
  }
  const answered = new Set(
    (state.steps[step.id]?.entries ?? []).flatMap((kept) =>
      kept.kind === 'watch-checked' && 'check' in kept.data && kept.voided === undefined
        ? [kept.data.check]
        : [],
    ),
  );
  const missing = step.checks.find(({ id }) => !answered.has(id));
  return missing ? no('unanswered', 'A check of this watch has no answer yet.', missing.ask) : OK;
}

function whyNotDriveEnded(state: JobState, step: PlanStep, entry: EntryOf<'drive-ended'>): Verdict {
  const started = state.steps[step.id]?.entries.findLast(
    (kept) => kept.kind === 'drive-started' && kept.voided === undefined,
  );
  if (!started || !('odometer' in started.data))
    return no('not-started', 'The road test has not been started.');
  return Number(entry.data.odometer) < Number(started.data.odometer)
    ? no('impossible', 'An odometer does not run backwards.', 'Read it again.')
    : OK;
}

function whyNotDisposed(state: JobState, entry: EntryOf<'deviation-disposed'>): Verdict {
  const deviation = state.deviations.find(({ id }) => id === entry.data.deviation);
  if (!deviation) return no('unknown-deviation', 'There is no such deviation.');
  if (deviation.disposed)
    return no('already-disposed', 'This deviation is disposed of already.', 'Revoke that first.');
  const isOutside = deviation.rule === 'clearance-outside' || deviation.rule === 'limit-outside';
  if (isOutside && entry.data.disposition === 'accept as is' && !entry.data.customerAgreed) {
    return no(
      'customer-missing',
      "Accepting outside the limits needs the customer's agreement.",
      'Record when and how they agreed.',
    );
  }
  return OK;
}

function whyNotNotApplicable(
  state: JobState,
  step: PlanStep | undefined,
  entry: EntryOf<'not-applicable'>,
  workshop: Workshop,
): Verdict {
  if (!step) return no('wrong-step', 'This belongs to a step.');
  if (step.kind === 'hold') return no('hold-point', 'A hold point is never set aside.');
  const roles = workshop.people.find(({ id }) => id === entry.by)?.roles ?? [];
  if (step.class === 'A' && !roles.includes('supervisor')) {
    return no('role', 'A step of class A is set aside by a supervisor.', 'Ask the supervisor.');
  }
  return state.steps[step.id]?.status === 'done' ? no('already-done', `"${step.title}" is done.`) : OK;
}

function isDataOf(kind: EntryKind, data: unknown): boolean {
  return z.safeParse(entryData[kind], data).success;
}
