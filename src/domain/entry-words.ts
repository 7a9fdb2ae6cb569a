/*
 * An entry in words, the same on the Floor, the Trail and in print. It never claims more than the record
 * knows: "confirmed at 110°" when somebody said so, "read 112°" when a value was keyed in or sent.
 */
import type { Entry, EntryData, EntryOf } from './entry';
import { findStep, type Plan } from './plan';
import { gradingWords } from './wear-words';

/** What the entry says, in one line without its author and time. */
export function wordsOf(entry: Entry, plan: Plan): string {
  const words = plainWords(entry, plan);
  const late = entry.afterwards
    ? ` (recorded afterwards, done ${entry.afterwards.when}: ${entry.afterwards.reason})`
    : '';
  return `${words}${late}`;
}

function titleOf(entry: Pick<Entry, 'step'>, plan: Plan): string {
  return (
    (entry.step === undefined ? undefined : findStep(plan, entry.step)?.title) ?? entry.step ?? 'the job'
  );
}

function plainWords(entry: Entry, plan: Plan): string {
  return workWords(entry, plan) ?? tighteningWords(entry, plan) ?? recordWords(entry, plan);
}

/** Steps of the job other than tightening. */
function workWords(entry: Entry, plan: Plan): string | undefined {
  const title = titleOf(entry, plan);
  switch (entry.kind) {
    case 'done':
    case 'placed':
      return withNote(title, 'note' in entry.data ? entry.data.note : undefined);
    case 'removed':
      return `${title}${entry.data.count === undefined ? '' : `, ${entry.data.count} counted`}${entry.data.into === undefined ? '' : `, in ${entry.data.into}`}`;
    case 'refitted':
      return `${title}${lotWords(entry.data.lot)}`;
    case 'counted':
      return `${title}: ${entry.data.count}`;
    case 'inspected':
      return `${title}: ${answerWords(entry.data.checks)}`;
    case 'read':
      return `${title}: ${entry.data.how === 'confirmed' ? 'confirmed at' : 'read'} ${entry.data.value} ${entry.data.unit}`;
    case 'turned':
      return title;
    case 'chose-shells':
      return `${title}: ${choiceWords(entry.data)}`;
    case 'graded':
      return `${title}: ${gradingWords(entry.data.shells)}`;
    case 'gauged':
      return gaugedWords(entry, plan);
    case 'measuring-again':
      return withNote(`${title}: measured again with new thread`, entry.data.reason);
    case 'fitted':
      return `${title}: ${entry.data.count}${lotWords(entry.data.lot)}`;
    case 'filled':
      return `${title}: ${entry.data.quantity} ${entry.data.unit}${lotWords(entry.data.lot)}`;
    case 'photographed':
      return `Photograph: ${entry.data.subject} (${entry.data.from})`;
    case 'watch-started':
      return `${title}: started`;
    case 'watch-checked':
      return watchWords(entry, plan);
    case 'watch-ended':
      return entry.data.early
        ? `${title}: ended early, ${entry.data.reason ?? 'no reason given'}`
        : `${title}: ended`;
    case 'drive-started':
      return `${title}: started at ${entry.data.odometer} ${entry.data.unit}`;
    case 'drive-ended':
      return `${title}: ended at ${entry.data.odometer} ${entry.data.unit}, ${answerWords(entry.data.checks)}`;
    default:
      return undefined;
  }
}

function choiceWords({ upper, lower, proposed, reason }: EntryData<'chose-shells'>): string {
  const words = `upper ${upper.grade} (lot ${upper.lot}), lower ${lower.grade} (lot ${lower.lot})`;
  const isOther = proposed && (proposed.upper !== upper.grade || proposed.lower !== lower.grade);
  return isOther
    ? `${words}; proposed were upper ${proposed.upper}, lower ${proposed.lower}: ${reason ?? 'no reason given'}`
    : words;
}

function gaugedWords(entry: EntryOf<'gauged'>, plan: Plan): string {
  const { end, by, width, clearance, unit, uncertainty, again, parts } = entry.data;
  const step = entry.step === undefined ? undefined : findStep(plan, entry.step);
  const how =
    by === 'band'
      ? 'by the card'
      : by === 'width'
        ? `from ${width ?? '?'} mm crushed width`
        : parts === undefined
          ? 'from part sizes'
          : `from bore ${parts.housingBore}, less shells ${parts.upperWall} and ${parts.lowerWall}, less pin ${parts.journal}`;
  const repeat = again === 'first' ? '' : `, ${again}`;
  return `Rod ${step?.rod ?? '?'}, ${end}: ${clearance} ${unit} ± ${uncertainty} ${how}${repeat}`;
}

function watchWords(entry: EntryOf<'watch-checked'>, plan: Plan): string {
  const step = entry.step === undefined ? undefined : findStep(plan, entry.step);
  const check = step?.kind === 'watch' ? step.checks.find(({ id }) => id === entry.data.check) : undefined;
  const limit = check?.limit === undefined ? undefined : plan.limits[check.limit]?.title;
  const what = check?.ask ?? limit ?? entry.data.check;
  const value =
    entry.data.value === undefined ? '' : `, read ${entry.data.value} ${entry.data.unit ?? ''}`.trimEnd();
  return withNote(`${what}${value}: ${entry.data.ok ? 'in order' : 'not in order'}`, entry.data.note);
}

function tighteningWords(entry: Entry, plan: Plan): string | undefined {
  switch (entry.kind) {
    case 'tightened': {
      const { bolt, cycle, target, value, outcome } = entry.data;
      const unit = target.kind === 'angle' ? '°' : ` ${target.unit}`;
      const said =
        value === undefined
          ? `confirmed at ${target.target}${unit}`
          : `read ${value}${unit} of ${target.target}${unit}`;
      const end =
        outcome === 'done' ? '' : outcome === 'over' ? ', turned too far' : ', stopped short and went on';
      const verb = target.kind === 'angle' ? 'turned' : 'tightened';
      return `${boltName(bolt)} ${verb}, ${said}, cycle ${cycle + 1} of ${cyclesOf(entry, plan)}${end}`;
    }
    case 'released':
      return entry.data.because === undefined
        ? `${boltName(entry.data.bolt)} released after cycle ${entry.data.cycle + 1}`
        : `${boltName(entry.data.bolt)} released: ${entry.data.because}`;
    case 'marked':
      return `${boltName(entry.data.bolt)} marked, ${entry.data.colour}`;
    case 'started-again':
      return `Bolts ${entry.data.bolts.join(' and ')} let off, the cap starts again: ${entry.data.reason}`;
    case 'bolt-replaced':
      return `${boltName(entry.data.bolt)} replaced${lotWords(entry.data.lot)}: ${entry.data.reason}`;
    case 'tool-taken':
      return `Tool for ${entry.data.use}: ${entry.data.tool.name}, ${entry.data.tool.serial}${entry.data.tool.dueOn === null ? ', no due date' : `, due ${entry.data.tool.dueOn}`}`;
    default:
      return undefined;
  }
}

function cyclesOf(entry: Entry, plan: Plan): number {
  const step = entry.step === undefined ? undefined : findStep(plan, entry.step);
  return (step?.kind === 'tighten' ? plan.programmes[step.programme]?.cycles.length : undefined) ?? 1;
}

/** Single bolts are called by their place; a ring of bolts in order has a name of its own. */
function boltName(bolt: string): string {
  return /^\d+[A-D]$/.test(bolt) ? `Bolt ${bolt}` : bolt.charAt(0).toUpperCase() + bolt.slice(1);
}

/** Signing, deviations, ways out, corrections, and what the server adds. */
function recordWords(entry: Entry, plan: Plan): string {
  const title = titleOf(entry, plan);
  switch (entry.kind) {
    case 'opened':
      return `Job ${entry.data.number} opened: ${entry.data.engine}, ${entry.data.odometer.value} ${entry.data.odometer.unit}`;
    case 'took-over':
      return withNote('Took the job over', entry.data.note);
    case 'signed':
      return `Signed the hold point “${title}”: “${entry.data.meaning}”, ${entry.data.presence}${entry.data.certificate === undefined ? '' : `, certificate ${entry.data.certificate.number}, ${entry.data.certificate.kind}`}${entry.data.notIndependent === undefined ? '' : ` (not independent: ${entry.data.notIndependent})`}`;
    case 'witnessed':
      return `Looked at “${title}”: “${entry.data.meaning}”`;
    case 'work-signed':
      return `Signed ${entry.data.covers.count} entries as their own work`;
    case 'countersigned':
      return 'Countersigned a correction';
    case 'deviation-raised':
      return `Deviation, class ${entry.data.class}: ${entry.data.words}`;
    case 'deviation-disposed':
      return `Deviation disposed of: ${entry.data.disposition}, ${entry.data.reason}`;
    case 'not-applicable':
      return `${title}: not applicable, ${entry.data.reason}`;
    case 'waiting-for-part':
      return withNote(`${title}: waiting for ${entry.data.part}`, entry.data.note);
    case 'part-arrived':
      return `${title}: the part is there${lotWords(entry.data.lot)}`;
    case 'extra-work':
      return `Extra work: ${entry.data.words}, approved by the ${entry.data.approval.who}, ${entry.data.approval.when}, ${entry.data.approval.how}`;
    case 'parked':
      return withNote('Made safe and parked', entry.data.note);
    case 'resumed':
      return withNote('Resumed', entry.data.note);
    case 'ended-unfinished':
      return `Ended unfinished, not to be run: ${entry.data.reason}`;
    case 'handed-over':
      return withNote('Handed over', entry.data.note);
    case 'corrected':
      return `Correction (${entry.data.class}): ${entry.data.reason}`;
    case 'taken-back':
      return withNote(`Taken back: ${entry.data.which}`, entry.data.reason);
    case 'revoked':
      return `Revoked: ${entry.data.reason}`;
    case 'plan-moved':
      return `Moved to a newer plan: ${entry.data.reason}`;
    case 'refused':
      return `Refused and kept aside: ${entry.data.reason}`;
    case 'tablet-lost':
      return `A tablet was declared lost; its records from number ${entry.data.from} on never came`;
    case 'restored':
      return `The server was restored to entry ${entry.data.after}: ${entry.data.reason}`;
    case 'erased':
      return `Erased for good (${erasedWords(entry.data)}): ${entry.data.reason}`;
    default:
      return title;
  }
}

function erasedWords({ fields, photographs }: EntryData<'erased'>): string {
  const count = photographs.length;
  const pictures = count === 0 ? [] : [`${count} photograph${count === 1 ? '' : 's'}`];
  return [...fields, ...pictures].join(', ');
}

function withNote(words: string, note: string | undefined): string {
  return note === undefined ? words : `${words}: ${note}`;
}

function lotWords(lot: string | undefined): string {
  return lot === undefined ? '' : `, lot ${lot}`;
}

function answerWords(answers: { ok: boolean; note?: string | undefined }[]): string {
  const bad = answers.filter(({ ok }) => !ok);
  if (bad.length === 0) return 'all in order';
  const notes = bad.flatMap(({ note }) => (note === undefined ? [] : [note]));
  return `${bad.length} not in order${notes.length === 0 ? '' : ` (${notes.join('; ')})`}`;
}
