/*
 * What the Floor knows between two touches. Nothing here is the only copy of anything: the records, the place
 * and the people are in IndexedDB, and the screen moves only after a record is durable there.
 */
import { createStore, type StoreApi } from 'zustand/vanilla';
import type { JobView } from '@/offline/job-store';
import type { JobRow, WorkshopRow } from '@/offline/database';
import type { Offline } from '@/offline/offline';
import { keepPlace, noteActivity, readPlace } from '@/offline/places';
import { listJobs } from '@/offline/prefetch';
import { recordEntries, type Draft } from '@/offline/record';
import type { SyncStatus } from '@/offline/sync-status';
import { listSignedIn, readTablet, whoIsWorking, type Tablet } from '@/offline/tablet';
import { findStep, type PlanStep } from '@/domain/plan';
import { capInHand, isToolChange } from './cap-in-hand';
import { following, NOWHERE, staysAfter, type FloorPlace } from './current-step';
import type { RecordOptions } from './run-context';

/** A record that takes longer than this shows that it is being written. */
const SLOW_MS = 100;

/** A second touch within this time is the same touch. */
export const TOUCH_GAP_MS = 500;

export type SignedInPerson = Awaited<ReturnType<typeof listSignedIn>>[number];

export interface FloorState {
  offline: Offline;
  /** What the tablet holds has been read once. */
  isReady: boolean;
  tablet?: Tablet | undefined;
  workshop?: WorkshopRow | undefined;
  signedIn: SignedInPerson[];
  working: string | null;
  jobs: JobRow[];
  /** How many records of each job the server refused. */
  refused: ReadonlyMap<string, number>;
  sync: SyncStatus;
  jobId: string | null;
  view?: JobView | undefined;
  /** Why the job can't be shown. */
  trouble?: string | undefined;
  place: FloorPlace;
  /** Nobody was at the tablet, or someone else is now: what became of the action shown is not known. */
  isAway: boolean;
  /** Someone else took a half-done cap over: whatever action comes next on it is asked about. */
  isNewHand: boolean;
  helpers: string[];
  flash: number;
  isRecording: boolean;
  isSettling: boolean;
  refusal?: { why: string; unlock?: string | undefined } | undefined;
  afterwards?: { when: string; reason: string } | undefined;
  /** Reads again what the tablet holds. */
  reload: () => Promise<void>;
  openJob: (job: string) => Promise<void>;
  leaveJob: () => void;
  record: (drafts: Draft[], options?: RecordOptions) => Promise<boolean>;
  goTo: (step: string) => void;
  goOn: (from: PlanStep) => void;
  showAction: (action: string) => void;
  settleAction: () => void;
  noteAway: () => void;
  noteTouch: () => void;
  setHelpers: (helpers: string[]) => void;
  setAfterwards: (afterwards: { when: string; reason: string } | undefined) => void;
}

export type FloorStore = StoreApi<FloorState>;
type Set = FloorStore['setState'];
type Get = FloorStore['getState'];

/** The Floor of one page on the tablet's records. */
export function createFloorStore(offline: Offline): FloorStore {
  return createStore<FloorState>((set, get) => {
    const writing: Writing = { isUnderWay: false };
    let stopWatching: (() => void) | undefined;
    return {
      offline,
      isReady: false,
      signedIn: [],
      working: null,
      jobs: [],
      refused: new Map(),
      sync: offline.sync.status(),
      jobId: null,
      place: NOWHERE,
      isAway: false,
      isNewHand: false,
      helpers: [],
      flash: 0,
      isRecording: false,
      isSettling: false,
      reload: () => reload(offline, set),
      async openJob(job) {
        stopWatching?.();
        set({
          jobId: job,
          view: undefined,
          trouble: undefined,
          place: NOWHERE,
          isAway: false,
          isNewHand: false,
          helpers: [],
          refusal: undefined,
        });
        stopWatching = offline.jobs.subscribe(job, (view) => set({ view }));
        await openJob(offline, job, set, get);
      },
      leaveJob() {
        stopWatching?.();
        stopWatching = undefined;
        set({ jobId: null, view: undefined, trouble: undefined, refusal: undefined });
      },
      record: (drafts, options) => record(offline, drafts, options, { set, get, writing }),
      goTo: (step) => movePlace({ step, isVisit: true }, set, get),
      goOn: (from) => goOn(from, set, get),
      showAction: (action) => showAction(action, set, get),
      settleAction: () => set({ isAway: false, isNewHand: false }),
      noteAway: () => set({ isAway: true }),
      noteTouch() {
        const { jobId } = get();
        if (jobId !== null) void noteActivity(offline, jobId);
      },
      setHelpers: (helpers) => set({ helpers }),
      setAfterwards: (afterwards) => set({ afterwards }),
    };
  });
}

async function reload(offline: Offline, set: Set): Promise<void> {
  const [tablet, workshop, signedIn, working, jobs, refused] = await Promise.all([
    readTablet(offline),
    offline.db.workshop.get('workshop'),
    listSignedIn(offline),
    whoIsWorking(offline),
    listJobs(offline),
    countRefused(offline),
  ]);
  set({ tablet, workshop, signedIn, working, jobs, refused, isReady: true });
}

async function countRefused({ db }: Offline): Promise<Map<string, number>> {
  const counts = new Map<string, number>();
  for (const { job } of await db.refused.toArray()) counts.set(job, (counts.get(job) ?? 0) + 1);
  return counts;
}

async function openJob(offline: Offline, job: string, set: Set, get: Get): Promise<void> {
  try {
    const [view, kept] = await Promise.all([offline.jobs.open(job), readPlace(offline, job)]);
    if (get().jobId !== job) return;
    const place = placeOf(kept);
    // A place that was kept means that an action may have been shown and done before the page came back.
    set({ view, place, isAway: place.action !== undefined });
  } catch (error) {
    if (get().jobId === job)
      set({ trouble: error instanceof Error ? error.message : 'This job can’t be opened.' });
  }
}

function placeOf(kept: { step: string | null; screen: unknown } | undefined): FloorPlace {
  if (!kept) return NOWHERE;
  const screen = (kept.screen ?? {}) as { isVisit?: unknown; action?: unknown };
  return {
    step: kept.step,
    isVisit: screen.isVisit === true,
    ...(typeof screen.action === 'string' ? { action: screen.action } : {}),
  };
}

function movePlace(place: FloorPlace, set: Set, get: Get): void {
  const { offline, jobId } = get();
  set({ place, refusal: undefined });
  if (jobId === null) return;
  const { step, ...screen } = place;
  void keepPlace(offline, jobId, { step, screen });
}

function goOn(from: PlanStep, set: Set, get: Get): void {
  const { view } = get();
  const next = view && following(view.state, from);
  movePlace(next ? { step: next.id, isVisit: false } : NOWHERE, set, get);
}

function showAction(action: string, set: Set, get: Get): void {
  const { place, isAway, isNewHand } = get();
  if (place.action === action) return;
  // Another action than the one before: there is nothing to ask about, unless somebody else had it in hand.
  if (isAway && !isNewHand) set({ isAway: false });
  movePlace({ ...place, action }, set, get);
}

/** One record at a time. Not part of the state: to draw it takes longer than the disk does. */
interface Writing {
  isUnderWay: boolean;
}

async function record(
  offline: Offline,
  drafts: Draft[],
  { by, photos }: RecordOptions = {},
  { set, get, writing }: { set: Set; get: Get; writing: Writing },
): Promise<boolean> {
  const { jobId, working, helpers, isSettling, afterwards } = get();
  const author = by ?? working;
  const question = questionAfter(drafts, get());
  if (jobId === null || author === null || writing.isUnderWay || isSettling) return false;
  writing.isUnderWay = true;
  const endSlow = offline.after(SLOW_MS, () => set({ isRecording: true }));
  const complete = drafts.map((draft): Draft => ({
    ...draft,
    with: draft.with ?? (by === undefined ? helpers.filter((id) => id !== author) : []),
    ...(afterwards && by === undefined ? { afterwards } : {}),
  }));
  try {
    const outcome = await recordEntries(offline, jobId, complete, { by: author, photos });
    if (!outcome.ok) {
      set({ isRecording: false, refusal: { why: outcome.why, unlock: outcome.unlock } });
      return false;
    }
    settle(offline, set, question);
    moveAfter(drafts, set, get);
    return true;
  } catch (error) {
    const words = error instanceof Error ? error.message : 'The tablet gave no reason.';
    set({
      isRecording: false,
      refusal: {
        why: `Nothing was recorded. ${words}`,
        unlock: 'Touch again; if it stays so, load the page again.',
      },
    });
    return false;
  } finally {
    endSlow();
    writing.isUnderWay = false;
  }
}

type Question = Pick<FloorState, 'isAway' | 'isNewHand'>;

/** Another person, or another tool within a cap: what became of the action on the screen has to be asked. */
function questionAfter(drafts: Draft[], { offline, view, workshop, place }: FloorState): Question {
  if (!view || !workshop) return { isAway: false, isNewHand: false };
  const { state } = view;
  const step = place.step === null ? undefined : findStep(state.plan, place.step);
  // Where no action was shown and no cap has begun there is nothing that can have been turned.
  const isInHand = place.action !== undefined || capInHand(state) !== undefined;
  const isNewHand = isInHand && drafts.some(({ kind }) => kind === 'took-over');
  const isNewTool = drafts.some(
    (draft) => draft.kind === 'tool-taken' && isToolChange(state, workshop, step, draft.data, offline.now()),
  );
  return { isAway: isNewHand || isNewTool, isNewHand: isNewHand && capInHand(state) !== undefined };
}

/** The edge flashes, and for a moment another touch is the same touch. */
function settle(offline: Offline, set: Set, question: Question): void {
  set((state) => ({
    isRecording: false,
    isSettling: true,
    refusal: undefined,
    flash: state.flash + 1,
    ...question,
    afterwards: undefined,
  }));
  offline.after(TOUCH_GAP_MS, () => set({ isSettling: false }));
}

const STOPS_WORK = new Set<Draft['kind']>(['parked', 'ended-unfinished']);

function moveAfter(drafts: Draft[], set: Set, get: Get): void {
  const { view, place } = get();
  // A job that has just been parked or ended shows what comes of that, whichever step it was said on.
  if (view && view.state.phase !== 'running' && drafts.some(({ kind }) => STOPS_WORK.has(kind))) {
    movePlace(NOWHERE, set, get);
    return;
  }
  const stepId = drafts.findLast(({ step }) => step !== undefined)?.step;
  const step = view && stepId !== undefined ? findStep(view.state.plan, stepId) : undefined;
  if (!view || !step) return;
  if (staysAfter(view.state, step)) {
    if (place.step !== step.id || !place.isVisit)
      movePlace({ ...place, step: step.id, isVisit: isShown(view, step) }, set, get);
  } else goOn(step, set, get);
}

/** A step that is done or barred is shown only because the technician stays on it. */
function isShown(view: JobView, step: PlanStep): boolean {
  const status = view.state.steps[step.id]?.status;
  return status === 'done' || status === 'waiting for a part' || status === 'not applicable';
}
