/*
 * What a job looks like after its entries: plain JSON, so that the server can keep it by head hash and a
 * tablet in IndexedDB. Only job.ts makes one. Everything in it follows from the plan and the entries.
 */
import type { Authorisation, Certificate } from './certificate';
import type { Entry, EntryKind } from './entry';
import type { BoltSet, CriticalClass, Plan, RodEffects } from './plan';

/** An entry as the state remembers it. */
export interface Kept {
  id: string;
  kind: EntryKind;
  step?: string | undefined;
  by: string;
  name: string;
  with: string[];
  device: string;
  deviceSeq: number;
  at: string;
  /** Absent while the entry is only on a tablet. */
  seq?: number | undefined;
  data: Entry['data'];
  afterwards?: { when: string; reason: string } | undefined;
  /** The entry that corrected it; `data` is then what the correction says. */
  correctedBy?: string | undefined;
  /** The substantive correction that its value comes from, by whom and when. */
  valueFrom?: { id: string; by: string; name: string; at: string } | undefined;
  takenBack?: 'touched by mistake, not done' | 'done, but wrong' | undefined;
  /** Why it no longer counts: reading voided, rod started again, plan moved. */
  voided?: string | undefined;
  revokedBy?: string | undefined;
  /** When the server opened the sealed PIN and found it right. */
  pinCheckedAt?: string | undefined;
  conflict?: string | undefined;
}

export type StepStatus = 'open' | 'begun' | 'done' | 'not applicable' | 'waiting for a part';

export interface StepState {
  status: StepStatus;
  /** Entries on the step, in order, with those that no longer count. */
  entries: Kept[];
  /** Why the step isn't offered although it is its turn. */
  waitingFor?: string | undefined;
}

export interface ShellFitted {
  grade: string;
  lot: string;
}

export interface ClearanceReading {
  entry: string;
  /** The substantive correction that it comes from. */
  correction?: string | undefined;
  end: 'front' | 'rear';
  clearance: string;
  uncertainty: string;
  verdict: 'inside' | 'unsure' | 'outside' | 'no limit known';
  /** 0 at the low limit, 1 at the high one. */
  place: number | null;
  at: string;
}

export interface RodState {
  rod: number;
  cap: 'on' | 'off';
  shells: 'old' | 'out' | 'dry' | 'oiled';
  thread: 'none' | 'laid';
  upper?: ShellFitted | undefined;
  lower?: ShellFitted | undefined;
  predicted?: string | undefined;
  /** The readings of the present assembly. */
  front?: ClearanceReading | undefined;
  rear?: ClearanceReading | undefined;
  /** Earlier readings that a change to the assembly made void. */
  voidReadings: (ClearanceReading & { why: string })[];
}

export interface BoltState {
  bolt: string;
  /** Which set is on now. */
  set: BoltSet;
  /** Tightenings of the bolt of each set that is (or was last) in this place. */
  used: Partial<Record<BoltSet, number>>;
  replaced: number;
  condemned?: string | undefined;
  lot?: string | undefined;
  /** Cycles completed in the tightening step that runs or ran last. */
  cyclesDone: number;
  marked?: { colour: string; at: string } | undefined;
}

export interface OpenItem {
  item: string;
  name: string;
  how: 'removed' | 'placed' | 'counted';
  since: string;
  step: string;
  count?: number | undefined;
  into?: string | undefined;
}

export interface Deviation {
  /** The id of the entry that raised it, with the rule's code for one that a rule opened. */
  id: string;
  rule?: string | undefined;
  class: CriticalClass;
  words: string;
  step?: string | undefined;
  rod?: number | undefined;
  blocks: boolean;
  /** Of a conflict between tablets: whose records it goes for, and the reason of the first. */
  conflict?: { code: string; device: string; why: string; entries: string[] } | undefined;
  raisedBy: string;
  raisedByName: string;
  raisedAt: string;
  disposed?:
    { entry: string; by: string; name: string; at: string; disposition: string; reason: string } | undefined;
}

export interface Signature {
  entry: string;
  holdPoint: string;
  step: string;
  by: string;
  name: string;
  at: string;
  meaning: string;
  count?: number | undefined;
  presence: string;
  covered: number;
  digest: string;
  upTo: Record<string, number>;
  /** The server opened the PIN and found it right. */
  checkedAt?: string | undefined;
  notIndependent?: string | undefined;
  /** By which certificate they signed. */
  certificate?: Certificate | undefined;
  /** Why it no longer stands. */
  reopened?: string | undefined;
  /** The steps that were done past it before it was opened again: they stay as they were recorded. */
  donePast?: string[] | undefined;
}

/** Somebody else's name under a correction: asked for, or given. */
export interface Countersign {
  correction: string;
  step: string;
  reason: string;
  by: string;
  /** The deviations that stay open until then; absent for a clerical correction under a signature. */
  deviations?: string[] | undefined;
  countersignedBy?: string | undefined;
}

export interface ToolInHand {
  id: string;
  name: string;
  serial: string;
  dueOn: string | null;
  at: string;
}

export interface JobState {
  plan: Plan;
  job: string | null;
  number: string | null;
  phase: 'not opened' | 'running' | 'parked' | 'ended unfinished' | 'handed over';
  openedAt?: string | undefined;
  odometer?: { value: string; unit: string } | undefined;
  /** Entries folded in so far, and the last recorded `seq` among them. */
  count: number;
  seq: number;
  steps: Record<string, StepState>;
  crankAngle: number;
  /** What done steps changed on the rods, in order, so that a taken-back one can be undone. */
  effects: { entry: string; rod: number; sets: RodEffects }[];
  rods: Record<string, RodState>;
  bolts: Record<string, BoltState>;
  open: OpenItem[];
  tallies: Record<string, { out: number; in?: number | undefined }>;
  tools: Partial<Record<'torque' | 'angle' | 'measuring', ToolInHand>>;
  /** Every tool taken for the job, the newest first: a wrench for each range lies on the trolley. */
  toolsTaken: (ToolInHand & { use: 'torque' | 'angle' | 'measuring' })[];
  /** Lots known from the kit check, by part, for picking from later. */
  lots: Record<string, string[]>;
  deviations: Deviation[];
  signatures: Signature[];
  /** Corrections that someone else countersigns. */
  countersigns: Countersign[];
  /** Who had a hand in each step, helpers and correctors included. */
  authors: Record<string, string[]>;
  people: Record<string, string>;
  /** Up to which number of each tablet a person has signed their entries as their own work. */
  workSigned?: Record<string, Record<string, number>> | undefined;
  /** Who is working now, and the last entry of each author. */
  working?: { by: string; name: string; since: string; device: string } | undefined;
  /** Things to ask about: impossible pace, a tablet that repeats numbers. */
  remarks: { code: string; words: string; at: string; entry: string }[];
  watch?: { step: string; startedAt: string } | undefined;
  /** Entries that belong to no step. */
  unstepped: Kept[];
  lastAt?: string | undefined;
  lastEntry?: string | undefined;
}

/** What a decision is judged by: the workshop as the tablet or the server knows it. */
export interface Workshop {
  /** Its trail's `seq` at that moment. */
  seq: number;
  zone: string;
  people: ({ id: string; name: string; roles: string[]; active: boolean } & Authorisation)[];
  tools: {
    id: string;
    name: string;
    kind: string;
    serial: string;
    rangeLow: string | null;
    rangeHigh: string | null;
    unit: string | null;
    dueOn: string | null;
    state: 'in use' | 'withdrawn';
    cycleLimit: number | null;
    cyclesUsed: number | null;
    /** Why its last calibration failed; a tablet that has not heard since then has none. */
    failure?: string | null | undefined;
  }[];
}

/** The answer to "may this be recorded now?" in words for the person who asked. */
export type Verdict = { ok: true } | { ok: false; code: string; why: string; unlock?: string | undefined };
