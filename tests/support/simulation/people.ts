/* What people do on a tablet: mostly what is next, now and then something else. */
import type { EntryKind } from '@/domain/entry';
import { nextSteps } from '@/domain/job';
import { unsignedUnder } from '@/domain/job-signing-rules';
import type { JobState, Kept } from '@/domain/job-state';
import type { PlanStep, StepOf } from '@/domain/plan';
import { coverageOf, coverWork } from '@/offline/evidence';
import type { JobView } from '@/offline/job-store';
import type { Offline } from '@/offline/offline';
import type { PreparedPhoto } from '@/offline/photo';
import type { Draft } from '@/offline/record';
import { nextScripted, scriptedSignature, type Kit, type Part } from '@db/scripted-work';
import type { Chance } from './seed';
import { PIN, type Beginning, type Name, type Person } from './workshop';

/** What somebody is about to do. */
export interface Deed {
  drafts: Draft[];
  by: Person;
  photos: PreparedPhoto[];
}

interface Scene {
  chance: Chance;
  offline: Offline;
  view: JobView;
  kit: Kit;
  beginning: Beginning;
  /** Somebody works here who was not here in the beginning. */
  hasNewcomer: boolean;
}

type Way = (scene: Scene) => Promise<Deed | undefined> | Deed | undefined;

/** Thinks of something to do on a job as it is seen here; undefined if nothing comes to mind. */
export async function thinkOf(scene: Scene): Promise<Deed | undefined> {
  return scene.chance.weigh(WAYS)(scene);
}

const WAYS: readonly (readonly [weight: number, way: Way])[] = [
  [60, goOn],
  [8, (scene) => act(scene, 'technician', remark(scene))],
  [4, (scene) => act(scene, 'technician', remark(scene, true))],
  [3, (scene) => act(scene, 'technician', remark(scene), remark(scene))],
  [6, doOutOfTurn],
  [5, correct],
  [4, takeBack],
  [3, revoke],
  [4, takeOver],
  [4, photograph],
  [4, dispose],
  [5, signSomething],
];

/** Two of each part, so that one may be gone. */
const HANDS: Record<Part, readonly Name[]> = {
  technician: ['ann', 'ben'],
  supervisor: ['supervisor', 'second'],
};

function handOf({ chance, beginning, hasNewcomer }: Scene, part: Part): Person {
  if (hasNewcomer && part === 'technician' && chance.happens(0.6)) return beginning.people.cy;
  return beginning.people[chance.pick(HANDS[part])];
}

function act(scene: Scene, part: Part, ...drafts: Draft[]): Deed {
  const by = handOf(scene, part);
  const named = drafts.flatMap((draft) => (draft.kind === 'photographed' ? [draft.data.photo] : []));
  const photos = [...scene.beginning.photos.values()].filter(({ hash }) => named.includes(hash));
  return { drafts, by, photos };
}

/** The step that is next, or that something undecided stands before. */
function nextStep(state: JobState): PlanStep | undefined {
  const [step] = nextSteps(state).filter(
    (one) => one.kind !== 'witness' || state.steps[one.id]?.status === 'open',
  );
  const blocking = state.deviations.find((one) => one.blocks && !one.disposed && one.step !== undefined);
  return step ?? state.plan.steps.find(({ id }) => id === blocking?.step);
}

function goOn(scene: Scene): Promise<Deed | undefined> | Deed | undefined {
  const step = nextStep(scene.view.state);
  if (!step) return dispose(scene);
  return step.kind === 'hold' && !isBlocked(scene.view.state, step) ? sign(scene, step) : doStep(scene, step);
}

function isBlocked(state: JobState, step: PlanStep): boolean {
  return state.deviations.some((one) => one.step === step.id && one.blocks && !one.disposed);
}

function doStep(scene: Scene, step: PlanStep): Deed | undefined {
  const next = nextScripted(scene.view.state, step, scene.kit);
  if (!next) return undefined;
  const { kind, data, part } = next;
  return act(scene, part, { kind, data, step: next.step } as Draft);
}

function doOutOfTurn(scene: Scene): Deed | undefined {
  return doStep(scene, scene.chance.pick(scene.view.state.plan.steps));
}

function remark({ chance }: Scene, blocks = false): Draft {
  const words = `Something to look at, no. ${chance.between(1, 999)}`;
  return { kind: 'deviation-raised', data: { class: blocks ? 'A' : 'C', words, blocks } };
}

function keptOf(state: JobState): Kept[] {
  return Object.values(state.steps).flatMap(({ entries }) => entries);
}

const CORRECTED: readonly EntryKind[] = ['done', 'counted', 'inspected', 'refitted', 'fitted', 'tightened'];

function correct(scene: Scene): Deed | undefined {
  const kept = keptOf(scene.view.state).filter(({ kind }) => CORRECTED.includes(kind));
  if (kept.length === 0) return undefined;
  const { id, kind, step, data } = scene.chance.pick(kept);
  const changed = kind === 'counted' ? { count: scene.chance.between(10, 13) } : data;
  return act(scene, 'supervisor', {
    kind: 'corrected',
    step,
    data: {
      of: id,
      class: scene.chance.pick(['clerical', 'substantive']),
      reason: 'Read again.',
      data: { ...changed },
    },
  });
}

function takeBack(scene: Scene): Deed | undefined {
  const kept = keptOf(scene.view.state);
  if (kept.length === 0) return undefined;
  // The newest ones, on which nothing stands yet.
  const newest = kept.sort((a, b) => a.at.localeCompare(b.at)).slice(-3);
  const { id, step } = scene.chance.pick(newest);
  const which = scene.chance.pick(['touched by mistake, not done', 'done, but wrong'] as const);
  return act(scene, 'supervisor', { kind: 'taken-back', step, data: { of: id, which } });
}

function revoke(scene: Scene): Deed | undefined {
  const { signatures, deviations } = scene.view.state;
  const ids = [
    ...signatures.map(({ entry }) => entry),
    ...deviations.flatMap(({ disposed }) => disposed?.entry ?? []),
  ];
  if (ids.length === 0) return undefined;
  const of = scene.chance.pick(ids);
  return act(scene, 'supervisor', { kind: 'revoked', data: { of, reason: 'It was not as thought.' } });
}

function pinOf({ chance }: Scene): string {
  return chance.happens(0.75) ? PIN : '135790';
}

function takeOver(scene: Scene): Deed {
  const pin = scene.chance.happens(0.7) ? pinOf(scene) : undefined;
  return act(scene, 'technician', { kind: 'took-over', data: { firstOfShift: true }, pin });
}

function photograph(scene: Scene): Deed | undefined {
  const { chance, beginning, view } = scene;
  const step = view.state.plan.steps.find(({ kind }) => kind === 'photograph');
  if (!step) return undefined;
  const { hash, bytes, type } = chance.pick([...beginning.photos.values()]);
  const data = {
    photo: hash,
    bytes: bytes.byteLength,
    type,
    subject: 'arrival',
    from: 'camera here',
  } as const;
  return act(scene, 'technician', { kind: 'photographed', step: step.id, data });
}

function dispose(scene: Scene): Deed | undefined {
  const open = scene.view.state.deviations.filter(({ disposed }) => !disposed);
  if (open.length === 0) return undefined;
  const { id, step } = scene.chance.pick(open);
  const disposition = scene.chance.pick(['accept as is', 'rework'] as const);
  const customerAgreed = { when: 'the same day', how: 'by telephone' };
  return act(scene, 'supervisor', {
    kind: 'deviation-disposed',
    step,
    data: { deviation: id, disposition, reason: 'Looked at together.', customerAgreed },
  });
}

function signSomething(scene: Scene): Promise<Deed | undefined> | undefined {
  const holds = scene.view.state.plan.steps.filter((step) => step.kind === 'hold');
  return sign(scene, scene.chance.pick(holds));
}

async function sign(scene: Scene, step: StepOf<'hold'>): Promise<Deed | undefined> {
  const [unsigned] = unsignedUnder(scene.view.state, step, scene.kit.workshop);
  const author = Object.values(scene.beginning.people).find(({ id }) => id === unsigned?.by);
  // Mostly the author says first that it is their work; a signature over what nobody answers for is refused.
  if (author && scene.chance.happens(0.9)) {
    const covers = await coverWork(scene.offline, scene.view, author.id);
    return { drafts: [{ kind: 'work-signed', data: { covers } }], by: author, photos: [] };
  }
  const by = handOf(scene, 'supervisor');
  const pin = pinOf(scene);
  const covers = await coverageOf(scene.offline, scene.view, step.id);
  const said = scriptedSignature(scene.view.state, step, { name: by.name, roles: [...by.roles] });
  const draft: Draft = { kind: 'signed', step: step.id, data: { ...said, covers }, pin };
  return { drafts: [draft], by, photos: [] };
}
