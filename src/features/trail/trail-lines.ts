import { wordsOf } from '@/domain/entry-words';
import { findStep, type Plan } from '@/domain/plan';
import { clockSeconds, dayOf } from '@/domain/time-words';
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
  isClockOff: boolean;
  who: string;
  withWhom: string[];
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
      recorded: clockSeconds(recorded.recordedAt, zone),
      isClockOff: Math.abs(recorded.clockOffsetMs) > CLOCK_TOLERANCE_MS,
      who: recorded.author.name,
      withWhom: recorded.with.map((id) => names.get(id) ?? id),
      tablet: tablets.get(recorded.device) ?? recorded.device,
      what: plan ? wordsOf(recorded, plan) : recorded.kind,
      isSignature: recorded.kind === 'signed',
      pinChecked: recorded.pin && clockSeconds(recorded.pin.checkedAt, zone),
      conflict: recorded.conflict?.why,
      superseded: superseded.get(recorded.id),
      hash,
    };
  });
}

/** Tablets by number in the order in which they come; the id's start tells them apart for ever. */
function tabletNames(devices: string[]): Map<string, string> {
  const names = new Map<string, string>();
  for (const device of devices) {
    if (!names.has(device))
      names.set(device, device === 'server' ? 'server' : `${names.size + 1} (${device.slice(0, 8)})`);
  }
  return names;
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

/** Where each phase begins and ends, by the steps that its entries stand on. */
export function phasesOf({ entries, plans }: ReadTrail): TrailPhase[] {
  const phases: TrailPhase[] = [];
  for (const { recorded } of entries) {
    const name = phaseOf(plans.get(recorded.plan), recorded.step);
    const last = phases.at(-1);
    if (last && (name === undefined || name === last.name)) last.to = recorded.seq;
    else phases.push({ name: name ?? 'opening', from: recorded.seq, to: recorded.seq });
  }
  return phases;
}

function phaseOf(plan: Plan | undefined, stepId: string | undefined): string | undefined {
  const step = plan && stepId !== undefined ? findStep(plan, stepId) : undefined;
  return step && plan?.phases.find(({ id }) => id === step.phase)?.name;
}
