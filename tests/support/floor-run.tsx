/* A run for tests: the real rules and the real fold on a journal, without storage, signatures or a network. */
import { useState, type ReactNode } from 'react';
import { vi } from 'vitest';
import { mayRecord } from '@/domain/job';
import { unsignedWork } from '@/domain/job-work';
import type { PlanStep } from '@/domain/plan';
import type { RefusedRow, WorkshopRow } from '@/offline/database';
import type { Draft } from '@/offline/record';
import { currentStep, following, NOWHERE, staysAfter, type FloorPlace } from '@/features/floor/current-step';
import { RunContext, type Run, type SheetName, type Worker } from '@/features/floor/run-context';
import { StepScreen } from '@/features/floor/steps/StepScreen';
import type { Journal } from './journal';
// The screens that the page loads later are here at once, so that no test waits for the disk.
import '@/features/floor/steps/ChooseShellsStep';
import '@/features/floor/steps/CountStep';
import '@/features/floor/steps/DriveStep';
import '@/features/floor/steps/FillStep';
import '@/features/floor/steps/FitStep';
import '@/features/floor/steps/GaugeStep';
import '@/features/floor/steps/GradeShellsStep';
import '@/features/floor/steps/HandOverStep';
import '@/features/floor/steps/HoldStep';
import '@/features/floor/steps/InspectStep';
import '@/features/floor/steps/MakeSafeStep';
import '@/features/floor/steps/PhotographStep';
import '@/features/floor/steps/ReadStep';
import '@/features/floor/steps/ResumeStep';
import '@/features/floor/steps/WatchStep';
import '@/features/floor/steps/WitnessStep';

// A whole journal is folded before the first screen; a busy machine takes its time.
vi.setConfig({ testTimeout: 30_000 });

export interface FixtureOptions {
  journal: Journal;
  person?: Worker;
  isOnline?: boolean;
  /** The action that was on the screen before the technician was away. */
  askAbout?: string;
  /** Milliseconds after the journal's last entry. */
  now?: () => number;
  start?: FloorPlace;
  onSheet?: (name: SheetName) => void;
  /** What the server refused of the job. */
  refused?: RefusedRow[];
  /** Something is being written down. */
  isBusy?: boolean;
  /** What lies over the step's screen. */
  over?: (step: PlanStep | undefined) => ReactNode;
}

export const technician: Worker = { id: 'tech', name: 'T. Nician', roles: ['technician'] };
export const supervisor: Worker = { id: 'sup', name: 'S. Visor', roles: ['supervisor'] };

/** The workshop of the journal as a tablet holds it. */
export function workshopRow(journal: Journal): WorkshopRow {
  return {
    key: 'workshop',
    name: 'Test workshop',
    ...journal.workshop,
    people: journal.workshop.people.map((person) => ({ ...person, hasPin: true })),
    sealingKey: { id: 'k1', publicKey: 'AAAA' },
  };
}

/** The run screen over a journal: what is recorded is judged and folded, and the step moves on as on the Floor. */
export function FixtureRun(options: FixtureOptions) {
  const { journal, person = technician, isOnline = true, over } = options;
  const [state, setState] = useState(journal.state);
  const [place, setPlace] = useState(options.start ?? NOWHERE);
  const [refusal, setRefusal] = useState<Run['refusal']>();
  const [askAbout, setAskAbout] = useState(options.askAbout);
  const [flash, setFlash] = useState(0);
  const [workshop] = useState(() => workshopRow(journal));
  const [stable] = useState(() => fixtureParts(journal, options));
  const step = currentStep(state, place);

  async function record(
    drafts: Draft[],
    { by = person.id }: { by?: string | undefined } = {},
  ): Promise<boolean> {
    const verdict = foldAll(journal, drafts, by);
    if (!verdict.ok) {
      setRefusal({ why: verdict.why, unlock: verdict.unlock });
      return false;
    }
    setRefusal(undefined);
    setState(journal.state);
    setFlash((count) => count + 1);
    setAskAbout(undefined);
    setPlace(placeAfter(journal, drafts, place));
    return true;
  }

  const run: Run = {
    ...stable,
    state,
    workshop,
    person,
    helpers: [],
    isOnline,
    isBusy: options.isBusy ?? false,
    refusal,
    refused: options.refused ?? [],
    flash,
    askAbout,
    record,
    goTo: (id) => setPlace({ step: id, isVisit: true }),
    goOn: (from) => setPlace({ step: following(state, from)?.id ?? null, isVisit: false }),
    settleAction: () => setAskAbout(undefined),
  };
  return (
    <RunContext value={run}>
      {step ? <StepScreen key={step.id} step={step} /> : <p>nothing to do</p>}
      {over?.(step)}
    </RunContext>
  );
}

function placeAfter(journal: Journal, drafts: Draft[], place: FloorPlace): FloorPlace {
  const id = drafts.findLast((draft) => draft.step !== undefined)?.step;
  const step = journal.plan.steps.find((one) => one.id === id);
  if (!step) return place;
  if (!staysAfter(journal.state, step))
    return { step: following(journal.state, step)?.id ?? null, isVisit: false };
  return { step: step.id, isVisit: journal.state.steps[step.id]?.status === 'done' };
}

/** All of the drafts or none, each judged on what the ones before it leave. */
function foldAll(journal: Journal, drafts: Draft[], by: string) {
  const before = { state: journal.state, entries: [...journal.entries] };
  for (const draft of drafts) {
    const options = { by, with: draft.with ?? [], ...(draft.step === undefined ? {} : { step: draft.step }) };
    const entry = journal.draft(draft.kind, draft.data, {
      ...options,
      afterMs: drafts[0] === draft ? 1000 : 0,
    });
    const verdict = mayRecord(journal.state, entry, journal.workshop);
    if (!verdict.ok) {
      Object.assign(journal, before);
      return verdict;
    }
    journal.fold(entry);
  }
  return { ok: true as const };
}

function coverOwn(journal: Journal, person: string) {
  const entries = unsignedWork(journal.state, person);
  const upTo: Record<string, number> = {};
  for (const { device, deviceSeq } of entries) upTo[device] = Math.max(upTo[device] ?? 0, deviceSeq);
  return { upTo, count: entries.length, digest: 'e'.repeat(64) };
}

function fixtureParts(journal: Journal, { now, onSheet, person = technician }: FixtureOptions) {
  const cell = (label: string, note?: string) => ({ label, note, onPress: () => undefined });
  return {
    cells: {
      job: cell(`Job ${journal.state.number ?? ''}, ${journal.plan.engine.name}`, 'MX 41 KLO'),
      phase: cell('Phase', 'section, class A'),
      sync: cell('All sent', 'nothing waits'),
      person: cell('T. Nician', 'change'),
    },
    now: now ?? (() => Date.parse(journal.state.lastAt ?? '2026-06-02T08:00:00.000Z') + 1000),
    whereIs: () => 'on this tablet' as const,
    openSheet: (name: SheetName) => onSheet?.(name),
    showAction: () => undefined,
    coverage: async (holdStepId: string) => journal.signedData(holdStepId).covers,
    ownWork: async () => coverOwn(journal, person.id),
    photoUrl: async () => undefined,
    canSign: async () => ({ ok: true as const }),
    syncNow: async () => undefined,
  };
}
