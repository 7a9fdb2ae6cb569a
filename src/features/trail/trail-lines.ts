import type { Recorded } from '@/domain/entry';
import { wordsOf } from '@/domain/entry-words';
import { findStep, type Plan } from '@/domain/plan';
import { clockSeconds, clockTime, dayOf, shortDay } from '@/domain/time-words';
import type { ReadTrail } from './read-trail';

/** One entry as the ledger shows it. */
export interface TrailLine {
  seq: number;
  id: string;
  /** Given on the first entry of a day, as "Tue 6 Oct 2026". */
  day?: string | undefined;
  tabletClock: string;
  /** The server's clock at receipt. */
  recorded: string;
  /** The server's day, given where it is another than the tablet's. */
  recordedDay?: string | undefined;
  isClockOff: boolean;
  who: string;
  withWhom: string[];
  /** Short, as "2"; tablets are numbered in the order in which they come in the job. */
  tablet: string;
  what: string;
  isSignature: boolean;
  /** When the PIN was opened and found right. */
  pinChecked?: string | undefined;
  conflict?: string | undefined;
  /** What superseded it, as "corrected by entry 31". */
  superseded?: string | undefined;
  hash: string;
}

export interface TrailPhase {
  name: string;
  from: number;
  to: number;
}

const CLOCK_TOLERANCE_MS = 5 * 60_000;

/** The ledger: every entry in words with who, with whom, both clocks, and on which tablet. */
export function linesOf({ entries, plans }: ReadTrail, zone: string): TrailLine[] {
  const names = new Map(entries.map(({ recorded }) => [recorded.by, recorded.author.name]));
  const tablets = tabletNames(entries.map(({ recorded }) => recorded.device));
  const superseded = supersededBy(entries);
  const byId = new Map(entries.map(({ recorded }) => [recorded.id, recorded]));
  let lastDay = '';
  return entries.map(({ recorded, hash }) => {
    const plan = plans.get(recorded.plan);
    const day = dayOf(recorded.at, zone);
    const isNewDay = day !== lastDay;
    lastDay = day;
    return {
      seq: recorded.seq,
      id: recorded.id,
      ...(isNewDay ? { day } : {}),
      tabletClock: clockSeconds(recorded.at, zone),
      ...recordedWords(recorded.recordedAt, day, zone),
      isClockOff: Math.abs(recorded.clockOffsetMs) > CLOCK_TOLERANCE_MS,
      who: recorded.author.name,
      withWhom: recorded.with.map((id) => names.get(id) ?? id),
      tablet: tablets.get(recorded.device) ?? recorded.device,
      what: plan ? whatWords(recorded, plan, byId) : recorded.kind,
      isSignature: recorded.kind === 'signed',
      pinChecked: recorded.pin && clockSeconds(recorded.pin.checkedAt, zone),
      conflict: recorded.conflict?.why,
      superseded: superseded.get(recorded.id),
      hash,
    };
  });
}

/** A correction says its reason and what stands there since; what stood there before keeps its own line. */
function whatWords(recorded: Recorded, plan: Plan, byId: ReadonlyMap<string, Recorded>): string {
  const words = wordsOf(recorded, plan);
  if (recorded.kind === 'countersigned' || recorded.kind === 'revoked') {
    const about = byId.get(recorded.data.of);
    return about ? `${words} (entry ${about.seq})` : words;
  }
  const earlier = recorded.kind === 'corrected' ? byId.get(recorded.data.of) : undefined;
  if (recorded.kind !== 'corrected' || earlier === undefined) return words;
  // The rules took the correction only because its data has the form of what it corrects.
  const since = { ...earlier, data: recorded.data.data } as Recorded;
  return `${words}. Entry ${earlier.seq} reads since: ${wordsOf(since, plan)}`;
}

function recordedWords(
  recordedAt: string,
  tabletDay: string,
  zone: string,
): Pick<TrailLine, 'recorded' | 'recordedDay'> {
  if (dayOf(recordedAt, zone) === tabletDay) return { recorded: clockSeconds(recordedAt, zone) };
  return { recorded: clockTime(recordedAt, zone), recordedDay: shortDay(recordedAt, zone) };
}

function tabletNames(devices: string[]): Map<string, string> {
  const tablets = [...new Set(devices)].filter((device) => device !== 'server');
  return new Map(tablets.map((device, i) => [device, String(i + 1)]));
}

function supersededBy(entries: ReadTrail['entries']): Map<string, string> {
  const words = new Map<string, string>();
  for (const { recorded } of entries) {
    if (recorded.kind === 'corrected') words.set(recorded.data.of, `corrected by entry ${recorded.seq}`);
    if (recorded.kind === 'taken-back') words.set(recorded.data.of, `taken back by entry ${recorded.seq}`);
    if (recorded.kind === 'revoked') words.set(recorded.data.of, `revoked by entry ${recorded.seq}`);
  }
  return words;
}

/** Where each phase begins and ends, by the steps that its entries stand on; what stands on none goes with the one before. */
export function phasesOf({ entries, plans }: ReadTrail): TrailPhase[] {
  const phases: TrailPhase[] = [];
  for (const { recorded } of entries) {
    const name = phaseOf(plans.get(recorded.plan), recorded.step);
    const last = phases.at(-1);
    if (last && (name === undefined || name === last.name)) last.to = recorded.seq;
    else if (name !== undefined) phases.push({ name, from: last ? recorded.seq : 1, to: recorded.seq });
  }
  return phases.length > 0 || entries.length === 0
    ? phases
    : [{ name: 'opening', from: 1, to: entries.length }];
}

function phaseOf(plan: Plan | undefined, stepId: string | undefined): string | undefined {
  const step = plan && stepId !== undefined ? findStep(plan, stepId) : undefined;
  return step && plan?.phases.find(({ id }) => id === step.phase)?.name;
}
