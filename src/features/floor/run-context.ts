import { createContext, useContext } from 'react';
import type { JobState, Verdict } from '@/domain/job-state';
import type { PlanStep } from '@/domain/plan';
import type { RefusedRow, Whereabouts, WorkshopRow } from '@/offline/database';
import type { Coverage } from '@/offline/evidence';
import type { PreparedPhoto } from '@/offline/photo';
import type { Draft } from '@/offline/record';

/** Everything that opens over the run screen. */
export type SheetName =
  | 'steps'
  | 'job'
  | 'sync'
  | 'person'
  | 'sign out'
  | 'problem'
  | 'take back'
  | 'correct'
  | 'deviation'
  | 'not applicable'
  | 'waiting for a part'
  | 'extra work'
  | 'recorded afterwards'
  | 'end unfinished'
  | 'torque tool'
  | 'angle tool'
  | 'measuring tool';

export interface Worker {
  id: string;
  name: string;
  roles: string[];
}

export interface RecordOptions {
  /** Another author than the person who works here: the signer of a hold point. */
  by?: string | undefined;
  photos?: PreparedPhoto[] | undefined;
}

/** One cell of the bar at the top. */
export interface TopCell {
  label: string;
  note?: string | undefined;
  onPress?: (() => void) | undefined;
  does?: string | undefined;
}

/** What a step's screen works with: the job as it stands, who works, and how something is recorded. */
export interface Run {
  state: JobState;
  workshop: WorkshopRow;
  person: Worker;
  /** Ids of those who work along. */
  helpers: string[];
  isOnline: boolean;
  /** Something is being written down, or was so a moment ago. */
  isBusy: boolean;
  /** Why the last touch was not recorded. */
  refusal?: { why: string; unlock?: string | undefined } | undefined;
  /** What the server refused of this job; it is kept. */
  refused: RefusedRow[];
  /** Counts what was recorded on this screen. */
  flash: number;
  /** The action that was shown before the technician was away, if the Floor has to ask about it. */
  askAbout?: string | undefined;
  /** When and why something is written down later than it was done. */
  afterwards?: { when: string; reason: string } | undefined;
  cells: { job: TopCell; phase: TopCell; sync: TopCell; person: TopCell };
  now: () => number;
  whereIs: (entryId: string) => Whereabouts;
  /** Durable before it resolves; false when it was refused, and then `refusal` says why. */
  record: (drafts: Draft[], options?: RecordOptions) => Promise<boolean>;
  goTo: (stepId: string) => void;
  /** Leaves the present step for the next that can be done. */
  goOn: (from: PlanStep) => void;
  openSheet: (name: SheetName) => void;
  /** Tells which action is on the screen now. */
  showAction: (action: string) => void;
  /** The technician answered what became of the action. */
  settleAction: () => void;
  coverage: (holdStepId: string) => Promise<Coverage>;
  /** What the person who works here has not signed as their own work yet. */
  ownWork: () => Promise<Coverage>;
  photoUrl: (hash: string) => Promise<string | undefined>;
  /** Whether a person can sign on this tablet. */
  canSign: (person: string) => Promise<Verdict>;
  syncNow: () => Promise<void>;
}

export const RunContext = createContext<Run | null>(null);

/** The run that the screen belongs to. */
export function useRun(): Run {
  const run = useContext(RunContext);
  if (!run) throw new Error('This screen belongs inside a run.');
  return run;
}
