import { generateKeyPairSync, type KeyObject, sign } from 'node:crypto';
import { hashJson } from '@/domain/canonical';
import type { Entry, EntryData, Recorded } from '@/domain/entry';
import { applyEntry, emptyJob, evidenceFor, mayRecord, nextSteps } from '@/domain/job';
import type { JobState, Workshop } from '@/domain/job-state';
import { findStep, type Plan, type PlanStep, type StepOf } from '@/domain/plan';
import { authorKeyId, contentHash, contentOf } from '@/domain/trail';
import { sha256Hex } from '@/server/crypto';
import { sealingSuite } from '@/server/sealing';
import { evidenceDigest } from '@/domain/job-evidence';
import { unsignedUnder } from '@/domain/job-signing-rules';
import { phaseToSign, unsignedWork } from '@/domain/job-work';
import type { EntryVerdict } from '@/server/sync-body';
import { type Kit, nextScripted, type ScriptedEntry, scriptedSignature } from './scripted-work';

/*
 * A tablet without a screen: it keeps confirmed entries and an outbox, signs with real author keys, numbers
 * what it makes and pushes it in batches, as a tablet in the bay does.
 */

export interface PushedEntry {
  entry: Entry;
  signature: string;
  key: string;
  sealed?: { keyId: string; enc: string; ciphertext: string } | undefined;
}

export interface PushBody {
  device: string;
  sentAt: string;
  jobs: { id: string; have: { seq: number; hash: string } | null }[];
  entries: PushedEntry[];
}

export interface PushAnswer {
  verdicts: EntryVerdict[];
  jobs: {
    id: string;
    entries: { recorded: Recorded; hash: string; signature: string | null; key: string | null }[];
    more: boolean;
    head: { seq: number; hash: string } | null;
    restored?: true;
    gone?: true;
  }[];
  workshop: number;
}

/** Somebody who works or signs on the tablet. */
export interface ScriptedPerson {
  id: string;
  name: string;
  roles: string[];
  pin?: string | undefined;
}

export interface TabletParts {
  device: string;
  workshop: Workshop;
  sealingKey: { id: string; publicKey: string };
  newId: () => string;
  /** Where the tablet's clock begins, milliseconds. */
  now: number;
  push: (body: PushBody) => Promise<PushAnswer>;
}

interface HeldJob {
  plan: Plan;
  planHash: string;
  confirmed: JobState;
  state: JobState;
  have: { seq: number; hash: string } | null;
  deviceSeq: number;
  outbox: PushedEntry[];
  hashes: Map<string, string>;
}

/** What an entry is made with, where it is not what the tablet would choose. */
export interface RecordOptions {
  by: ScriptedPerson;
  with?: string[];
  /** Moves the tablet's clock on before the entry; five seconds unless given. */
  afterMs?: number;
  pin?: string;
  /** Makes the entry even if the tablet's own rules forbid it. */
  force?: boolean;
  /** Changes fields of the finished entry before it is signed. */
  change?: (entry: Entry) => Entry;
}

const BATCH = 200;
const SLOW_MS = 30_000;

export class ScriptedTablet {
  readonly device: string;
  workshop: Workshop;
  now: number;
  readonly jobs = new Map<string, HeldJob>();
  private readonly keys = new Map<string, { id: string; privateKey: KeyObject }>();

  constructor(private readonly parts: TabletParts) {
    this.device = parts.device;
    this.workshop = parts.workshop;
    this.now = parts.now;
  }

  /** Makes a person's key on this tablet; enrol the public half with the server. */
  makeKey(person: string): { id: string; publicKey: string } {
    const { privateKey, publicKey } = generateKeyPairSync('ec', { namedCurve: 'P-256' });
    const { x = '', y = '' } = publicKey.export({ format: 'jwk' });
    const point = Buffer.concat([Uint8Array.of(4), Buffer.from(x, 'base64url'), Buffer.from(y, 'base64url')]);
    const id = authorKeyId(point, sha256Hex);
    this.keys.set(person, { id, privateKey });
    return { id, publicKey: point.toString('base64url') };
  }

  /** Takes a job up; its trail comes with the next sync. */
  takeUp(job: string, plan: Plan): void {
    const planHash = hashJson(plan, sha256Hex);
    const state = emptyJob(plan);
    const held = {
      plan,
      planHash,
      confirmed: state,
      state,
      have: null,
      deviceSeq: 0,
      outbox: [],
      hashes: new Map(),
    };
    this.jobs.set(job, held);
  }

  held(job: string): HeldJob {
    const held = this.jobs.get(job);
    if (held === undefined) throw new RangeError('This tablet has not taken the job up.');
    return held;
  }

  /** Makes an entry, signs it and puts it into the outbox. */
  async record(
    job: string,
    made: Omit<ScriptedEntry, 'part' | 'afterMs'>,
    options: RecordOptions,
  ): Promise<Entry> {
    const held = this.held(job);
    const entry = this.draw(job, held, made, options);
    if (options.force !== true) {
      const verdict = mayRecord(held.state, entry, this.workshop);
      if (!verdict.ok)
        throw new Error(`${entry.kind} on ${entry.step ?? 'no step'}: ${verdict.why} (${verdict.code})`);
    }
    const pushed = await this.signed(entry, options);
    held.deviceSeq = entry.deviceSeq;
    held.outbox.push(pushed);
    held.hashes.set(entry.id, contentHash(entry, sha256Hex));
    held.state = applyEntry(held.state, entry);
    return entry;
  }

  /** Signs a hold point over exactly the evidence that this tablet holds, once its authors signed for their work. */
  async sign(job: string, holdStep: string, options: RecordOptions): Promise<Entry> {
    const step = findStep(this.held(job).plan, holdStep);
    if (step?.kind !== 'hold') throw new RangeError(`"${holdStep}" is no hold point.`);
    for (const { by } of unsignedUnder(this.held(job).state, step, this.workshop)) {
      const author = this.workshop.people.find(({ id }) => id === by);
      if (author && this.keys.has(by)) await this.signWork(job, author);
    }
    const { state } = this.held(job);
    const { certificate } = this.workshop.people.find(({ id }) => id === options.by.id) ?? {};
    const data = {
      ...scriptedSignature(state, step, options.by),
      covers: this.coverage(job, step),
      ...(certificate ? { certificate } : {}),
    };
    const pin = options.pin ?? options.by.pin;
    return this.record(
      job,
      { kind: 'signed', step: holdStep, data },
      { ...options, ...(pin === undefined ? {} : { pin }) },
    );
  }

  /** A person signs for all that they have recorded and not signed for yet; false where there is nothing. */
  async signWork(job: string, by: ScriptedPerson, options: Omit<RecordOptions, 'by'> = {}): Promise<boolean> {
    const own = unsignedWork(this.held(job).state, by.id);
    if (own.length === 0) return false;
    await this.record(
      job,
      { kind: 'work-signed', data: { covers: this.coverageOf(job, own) } },
      { ...options, by, with: [] },
    );
    return true;
  }

  private coverage(job: string, step: StepOf<'hold'>): EntryData<'signed'>['covers'] {
    return this.coverageOf(job, evidenceFor(this.held(job).state, step.id));
  }

  private coverageOf(
    job: string,
    evidence: readonly { id: string; device: string; deviceSeq: number }[],
  ): EntryData<'signed'>['covers'] {
    const { hashes } = this.held(job);
    const upTo: Record<string, number> = {};
    for (const { device, deviceSeq } of evidence) upTo[device] = Math.max(upTo[device] ?? 0, deviceSeq);
    const digest = evidenceDigest(
      evidence.map(({ id }) => hashes.get(id) ?? ''),
      sha256Hex,
    );
    return { upTo, count: evidence.length, digest };
  }

  /** Does what comes, in order, until a step is next, so many entries are made, or nothing is left to do. */
  async perform(
    job: string,
    people: { technician: ScriptedPerson; supervisor: ScriptedPerson },
    kit: Kit,
    until: {
      step?: string;
      entries?: number;
      signs?: boolean;
      /** How much slower than brisk everything but the touches at the wrench goes. */
      pace?: number;
      between?: (step: PlanStep) => Promise<void> | void;
    } = {},
  ): Promise<number> {
    let made = 0;
    for (;;) {
      const { state } = this.held(job);
      const [step] = nextSteps(state).filter(
        (one) => one.kind !== 'witness' || state.steps[one.id]?.status === 'open',
      );
      const blocked = step ?? blockedStep(state);
      if (blocked === undefined || blocked.id === until.step || made === until.entries) return made;
      await until.between?.(blocked);
      for (const by of Object.values(people)) {
        if (phaseToSign(state, by.id) !== undefined) await this.signWork(job, by);
      }
      const next = nextScripted(this.held(job).state, blocked, { ...kit, workshop: this.workshop });
      if (next !== undefined) {
        const afterMs = next.afterMs < SLOW_MS ? next.afterMs : next.afterMs * (until.pace ?? 1);
        await this.record(job, next, { by: people[next.part], afterMs });
      } else if (blocked.kind === 'hold' && until.signs !== false) {
        await this.sign(job, blocked.id, { by: people.supervisor, afterMs: 4 * 60_000 });
        // A route may say that work waits for the server's word on this one.
        if (!nextSteps(this.held(job).state).length || stillOpen(this.held(job).state, blocked.id))
          await this.sync();
      } else {
        return made;
      }
      made += 1;
    }
  }

  /** Pushes the outbox, a batch at a time, and pulls what came in meanwhile. */
  async sync(): Promise<EntryVerdict[]> {
    const verdicts: EntryVerdict[] = [];
    const waiting = new Set<string>();
    for (;;) {
      const entries = [...this.jobs.values()]
        .flatMap(({ outbox }) => outbox)
        .filter(({ entry }) => !waiting.has(entry.id))
        .slice(0, BATCH);
      const jobs = [...this.jobs].map(([id, { have }]) => ({ id, have }));
      const sentAt = new Date(this.now).toISOString();
      const answer = await this.parts.push({ device: this.device, sentAt, jobs, entries });
      verdicts.push(...answer.verdicts);
      for (const { id, verdict } of answer.verdicts) {
        if (verdict === 'waiting') waiting.add(id);
        if (verdict === 'refused') for (const held of this.jobs.values()) drop(held, id);
      }
      for (const job of answer.jobs) this.take(job);
      const isMore = answer.jobs.some(({ more }) => more);
      const isUnsent = [...this.jobs.values()].some(({ outbox }) =>
        outbox.some(({ entry }) => !waiting.has(entry.id)),
      );
      if (!isMore && !isUnsent) return verdicts;
    }
  }

  private take(answer: PushAnswer['jobs'][number]): void {
    const held = this.jobs.get(answer.id);
    if (held === undefined || answer.gone === true) return;
    for (const { recorded, hash } of answer.entries) {
      held.confirmed = applyEntry(held.confirmed, recorded);
      held.have = { seq: recorded.seq, hash };
      held.hashes.set(recorded.id, contentHash(contentOf(recorded), sha256Hex));
      held.outbox = held.outbox.filter(({ entry }) => entry.id !== recorded.id);
      if (recorded.device === this.device) held.deviceSeq = Math.max(held.deviceSeq, recorded.deviceSeq);
    }
    held.state = held.outbox.reduce((state, { entry }) => applyEntry(state, entry), held.confirmed);
  }

  private draw(
    job: string,
    held: HeldJob,
    made: Omit<ScriptedEntry, 'part' | 'afterMs'>,
    { by, with: helpers = [], afterMs = 5000, change = (entry) => entry }: RecordOptions,
  ): Entry {
    this.now += afterMs;
    const { kind, data, step } = made;
    return change({
      v: 1,
      id: this.parts.newId(),
      job,
      plan: held.planHash,
      basis: held.have?.seq ?? 0,
      workshop: this.workshop.seq,
      kind,
      ...(step === undefined ? {} : { step }),
      by: by.id,
      author: { name: by.name, roles: by.roles },
      with: helpers,
      device: this.device,
      deviceSeq: held.deviceSeq + 1,
      at: new Date(this.now).toISOString(),
      data,
    } as Entry);
  }

  /** The entry as it is pushed; its PIN, if any, sealed to the server. */
  async signed(entry: Entry, { by, pin }: Pick<RecordOptions, 'by' | 'pin'>): Promise<PushedEntry> {
    const key = this.keys.get(by.id);
    if (key === undefined) throw new RangeError(`${by.name} has no key on this tablet.`);
    const content = contentHash(entry, sha256Hex);
    const signature = sign('sha256', Buffer.from(content, 'ascii'), {
      key: key.privateKey,
      dsaEncoding: 'ieee-p1363',
    }).toString('base64url');
    const pushed = { entry, signature, key: key.id };
    if (pin === undefined) return pushed;
    const digest = entry.kind === 'signed' ? entry.data.covers.digest : content;
    return { ...pushed, sealed: await this.seal(pin, `${entry.id}.${digest}`) };
  }

  private async seal(pin: string, bound: string): Promise<NonNullable<PushedEntry['sealed']>> {
    const { sealingKey } = this.parts;
    const suite = sealingSuite();
    const point = new Uint8Array(Buffer.from(sealingKey.publicKey, 'base64url'));
    const recipientPublicKey = await suite.kem.deserializePublicKey(point.buffer);
    const bytes = (text: string) => new TextEncoder().encode(text).buffer;
    const { ct, enc } = await suite.seal({ recipientPublicKey }, bytes(pin), bytes(bound));
    return {
      keyId: sealingKey.id,
      enc: Buffer.from(enc).toString('base64url'),
      ciphertext: Buffer.from(ct).toString('base64url'),
    };
  }
}

function drop(held: HeldJob, id: string): void {
  held.outbox = held.outbox.filter(({ entry }) => entry.id !== id);
}

function stillOpen(state: JobState, step: string): boolean {
  return state.steps[step]?.status !== 'done';
}

/** A step whose deviation stands in the way of everything else. */
function blockedStep(state: JobState): PlanStep | undefined {
  const open = state.deviations.find(
    (one) => one.blocks && one.disposed === undefined && one.step !== undefined,
  );
  return open?.step === undefined ? undefined : findStep(state.plan, open.step);
}
