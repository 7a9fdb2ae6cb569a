/*
 * A small honest server for tests of a tablet: it numbers entries without gaps and chains them, checks each
 * author's signature, holds every tablet to its own count, opens sealed PINs, and can lose replies, be away,
 * and be restored from a backup. No rules of the trade: what the tablet allowed is recorded.
 */
import { createHash, webcrypto } from 'node:crypto';
import { Aes128Gcm, CipherSuite, DhkemP256HkdfSha256, HkdfSha256 } from '@hpke/core';
import { fromBase64url, toBase64url } from '@/domain/base64url';
import type { Entry } from '@/domain/entry';
import type { Plan } from '@/domain/plan';
import { chainHash, contentHash } from '@/domain/trail';
import { buildWorkshop } from './journal';

const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex');
const NO_HASH = '0'.repeat(64);

interface Sealed {
  keyId: string;
  enc: string;
  ciphertext: string;
}

interface Pushed {
  entry: Entry;
  signature: string;
  key: string;
  sealed?: Sealed;
  refused?: { reason: string };
}

interface Row {
  recorded: Record<string, unknown> & { seq: number; id: string };
  hash: string;
  signature: string | null;
  key: string | null;
}

interface JobRecord {
  id: string;
  number: string;
  plan: string;
  people: string[];
  rows: Row[];
  /** The last number heard of each tablet, recorded or refused. */
  numbers: Record<string, number>;
  refused: Record<string, string>;
}

interface SyncBody {
  device: string;
  jobs: { id: string; have: { seq: number; hash: string } | null }[];
  entries: Pushed[];
}

type Judge = (entry: Entry) => { verdict: 'refused' | 'waiting'; code: string; reason: string } | undefined;

const suite = () =>
  new CipherSuite({ kem: new DhkemP256HkdfSha256(), kdf: new HkdfSha256(), aead: new Aes128Gcm() });

export class OfflineServer {
  readonly jobs = new Map<string, JobRecord>();
  readonly photos = new Map<string, Uint8Array>();
  readonly requests: { path: string; body: unknown }[] = [];
  readonly pins = new Map([['sup', '4711']]);
  workshop = { ...buildWorkshop(), name: 'Testwell Engines' };
  clock = Date.parse('2026-06-02T08:00:00.000Z');
  /** Who is signed in at the browser that asks. */
  session: string | undefined;
  sideBySide: { personId: string; name: string; roles: string[]; sessionUntil: string }[] = [];
  /** The server is not reached at all. */
  isAway = false;
  /** So many replies are lost after the work was done. */
  lostReplies = 0;
  pageSize = 500;
  judge: Judge = () => undefined;
  /** Changes an answer on its way. */
  onAnswer: (path: string, answer: unknown) => unknown = (_path, answer) => answer;
  private restoredAt: string | null = null;
  private devices = new Map<string, string>();
  private keys = new Map<string, { person: string; device: string; point: Uint8Array<ArrayBuffer> }>();
  private plans = new Map<string, Plan>();
  private sealing: CryptoKeyPair | undefined;
  private count = 0;
  private turn: Promise<unknown> = Promise.resolve();

  /** Opens a job in the office, by the server's own hand; the answer is its id. */
  addJob(plan: Plan, people: string[] = ['tech']): string {
    const hash = contentHash(plan, sha256);
    this.plans.set(hash, plan);
    const number = String(this.jobs.size + 147).padStart(4, '0');
    const job: JobRecord = {
      id: this.newId(),
      number,
      plan: hash,
      people,
      rows: [],
      numbers: {},
      refused: {},
    };
    this.jobs.set(job.id, job);
    this.append(job, {
      entry: this.officeEntry(job, 'opened', {
        number,
        engine: plan.engine.name,
        options: plan.options,
        odometer: { value: '120300', unit: 'km' },
        commitments: {},
        oldParts: 'to the customer',
      }),
      signature: 'c2lnbmVkIGluIHRoZSBvZmZpY2U',
      key: 'office',
    });
    return job.id;
  }

  /** The office moves a job to another plan. */
  movePlan(jobId: string, plan: Plan): void {
    const job = this.jobs.get(jobId)!;
    const to = contentHash(plan, sha256);
    this.plans.set(to, plan);
    const data = { to, reason: 'a better way', kept: [], voided: [] };
    this.append(job, { entry: this.officeEntry(job, 'plan-moved', data), signature: null, key: null });
    job.plan = to;
  }

  /** The office erases personal data of a job. */
  erase(jobId: string, data: { fields: string[]; photographs: string[] }): void {
    const job = this.jobs.get(jobId)!;
    const told = { ...data, reason: 'asked for', decidedBy: 'own' };
    this.append(job, { entry: this.officeEntry(job, 'erased', told), signature: null, key: null });
    for (const hash of data.photographs) this.photos.delete(hash);
  }

  /** The entries of a job as they were made, in the order of the trail. */
  entriesOf(job: string): Row['recorded'][] {
    return this.jobs.get(job)!.rows.map(({ recorded }) => recorded);
  }

  /** A copy of everything recorded, to be given back to `restore`. */
  backup(): string {
    return JSON.stringify([...this.jobs.values()]);
  }

  restore(backup: string): void {
    this.clock += 1000;
    this.restoredAt = this.stamp();
    this.jobs.clear();
    for (const job of JSON.parse(backup) as JobRecord[]) this.jobs.set(job.id, job);
    this.photos.clear();
  }

  /** The workshop forgets a tablet. */
  forgetTablets(): void {
    for (const id of this.devices.keys()) this.devices.set(id, 'withdrawn');
  }

  readonly fetch = async (path: string, init: RequestInit = {}): Promise<Response> => {
    if (this.isAway) throw new TypeError('Failed to fetch');
    const body: unknown = typeof init.body === 'string' ? JSON.parse(init.body) : init.body;
    this.requests.push({ path, body });
    const credential = new Headers(init.headers).get('authorization');
    // One after the other, as transactions on one database are.
    const turn = this.turn.then(() => this.answer(path, init.method ?? 'GET', body, credential));
    this.turn = turn.catch(() => undefined);
    const [status, answer] = await turn;
    if (this.lostReplies > 0) {
      this.lostReplies -= 1;
      throw new TypeError('network error');
    }
    return new Response(JSON.stringify(status < 300 ? this.onAnswer(path, answer) : answer), { status });
  };

  private async answer(
    path: string,
    method: string,
    body: unknown,
    authorization: string | null,
  ): Promise<[number, unknown]> {
    if (path === '/api/devices') return this.enrol(body as { id: string });
    if (path === '/api/me') {
      return this.session === undefined
        ? refusal(401, 'not-signed-in', 'Nobody is signed in here.')
        : [200, { actor: { personId: this.session }, sideBySide: this.sideBySide }];
    }
    if (path === '/api/auth/sign-out') return this.signOut((body as { person: string }).person);
    if (path === '/api/auth/switch') return this.switchTo((body as { person: string }).person);
    const device = this.deviceOf(authorization);
    if (!device) return refusal(401, 'unknown-tablet', 'This tablet is not known to the workshop.');
    if (path === '/api/keys') return this.addKey(device, (body as { publicKey: string }).publicKey);
    if (path === '/api/workshop') return [200, await this.workshopAnswer()];
    if (path === '/api/floor/jobs') return [200, { jobs: [...this.jobs.values()].map(listed) }];
    if (path === '/api/sync') return this.sync(device, body as SyncBody);
    const [, , kind, hash = ''] = path.split('/');
    if (kind === 'plans') {
      const plan = this.plans.get(hash);
      return plan ? [200, plan] : refusal(404, 'not-found', 'No such plan.');
    }
    if (kind === 'photos' && method === 'PUT') return this.takePhoto(hash, body as ArrayBuffer);
    return refusal(404, 'not-found', 'Nothing is here.');
  }

  /** Ends one session of those side by side; some session has to be the active one. */
  private signOut(person: string): [number, unknown] {
    const isHere = this.sideBySide.some(({ personId }) => personId === person);
    if (this.session === undefined || !isHere)
      return refusal(401, 'not-signed-in', 'Nobody is signed in here.');
    this.sideBySide = this.sideBySide.filter(({ personId }) => personId !== person);
    if (this.session === person) this.session = this.sideBySide[0]?.personId;
    return [200, { ok: true }];
  }

  private switchTo(person: string): [number, unknown] {
    const isHere = this.sideBySide.some(({ personId }) => personId === person);
    if (!isHere) return refusal(401, 'not-signed-in', 'This person is not signed in here.');
    this.session = person;
    return [200, { ok: true }];
  }

  private enrol({ id }: { id: string }): [number, unknown] {
    if (this.session === undefined) return refusal(401, 'not-signed-in', 'Sign in first.');
    if (this.devices.has(id)) return refusal(409, 'conflict', 'Make a new id and enrol again.');
    this.devices.set(id, `secret-${id}`);
    return [201, { id, credential: `secret-${id}` }];
  }

  private deviceOf(authorization: string | null): string | undefined {
    const match = /^Tablet ([0-9a-f-]{36})\.(.+)$/.exec(authorization ?? '');
    const id = match?.[1] ?? '';
    return match && this.devices.get(id) === match[2] ? id : undefined;
  }

  private addKey(device: string, publicKey: string): [number, unknown] {
    if (this.session === undefined) return refusal(401, 'not-signed-in', 'Sign in first.');
    const point = fromBase64url(publicKey);
    const id = sha256(point).slice(0, 16);
    this.keys.set(id, { person: this.session, device, point });
    return [200, { id, workshop: this.workshop.seq }];
  }

  private async workshopAnswer(): Promise<unknown> {
    const { publicKey } = await this.sealingKey();
    const raw = new Uint8Array(await webcrypto.subtle.exportKey('raw', publicKey));
    const people = this.workshop.people.map((person) => ({ ...person, hasPin: this.pins.has(person.id) }));
    return {
      ...this.workshop,
      restoredAt: this.restoredAt,
      people,
      sealingKey: { id: 'seal-1', publicKey: toBase64url(raw) },
      headKey: 'f'.repeat(64),
      secondUnits: 'none',
    };
  }

  private async sealingKey(): Promise<CryptoKeyPair> {
    this.sealing ??= await suite().kem.generateKeyPair();
    return this.sealing;
  }

  private takePhoto(hash: string, bytes: ArrayBuffer): [number, unknown] {
    const held = new Uint8Array(bytes);
    if (sha256(held) !== hash) return refusal(400, 'invalid-field', 'These bytes have another hash.');
    this.photos.set(hash, held);
    return [201, { hash }];
  }

  private async sync(device: string, body: SyncBody): Promise<[number, unknown]> {
    if (body.device !== device || body.entries.length > 200) return refusal(400, 'invalid-field', 'No.');
    const verdicts = [];
    for (const pushed of body.entries)
      verdicts.push({ id: pushed.entry.id, ...(await this.receive(pushed)) });
    const jobs = body.jobs.map(({ id, have }) => this.pageOf(id, have));
    return [
      200,
      { at: this.stamp(), verdicts, jobs, workshop: this.workshop.seq, restoredAt: this.restoredAt },
    ];
  }

  private pageOf(id: string, have: { seq: number; hash: string } | null): unknown {
    const job = this.jobs.get(id);
    if (!job) return { id, entries: [], more: false, head: null, gone: true };
    const isKnown = have === null || job.rows[have.seq - 1]?.hash === have.hash;
    const from = isKnown ? (have?.seq ?? 0) : 0;
    const entries = job.rows.slice(from, from + this.pageSize);
    const more = from + entries.length < job.rows.length;
    return { id, entries, more, head: headOf(job), ...(isKnown ? {} : { restored: true }) };
  }

  /** Takes one record, as a push brings it. */
  async receive(pushed: Pushed): Promise<Record<string, unknown>> {
    const { entry } = pushed;
    const job = this.jobs.get(entry.job);
    if (!job) return { verdict: 'refused', code: 'unknown-job', reason: 'There is no such job.' };
    const held = job.rows.find(({ recorded }) => recorded.id === entry.id);
    if (held) return { verdict: 'already recorded', seq: held.recorded.seq, hash: held.hash };
    const before = job.refused[entry.id];
    if (before !== undefined) return { verdict: 'refused', code: before, reason: 'It was refused before.' };
    const last = job.numbers[entry.device] ?? 0;
    if (entry.deviceSeq > last + 1) {
      return {
        verdict: 'waiting',
        code: 'gap',
        reason: `Number ${last + 1} of this tablet has not come yet.`,
      };
    }
    const forged = await this.whyForged(pushed);
    const told = pushed.refused && ({ verdict: 'refused', code: 'told-before', ...pushed.refused } as const);
    const judged =
      forged === undefined
        ? (told ?? this.judge(entry))
        : { verdict: 'refused' as const, code: 'not-the-author', reason: forged };
    if (judged?.verdict === 'waiting') return judged;
    const pin = await this.checkPin(pushed);
    job.numbers[entry.device] = entry.deviceSeq;
    const refused = judged ?? (pin === 'wrong' ? WRONG_PIN : undefined);
    if (refused) {
      job.refused[entry.id] = refused.code;
      const data = { content: contentHash(entry, sha256), code: refused.code, reason: refused.reason };
      this.append(job, { entry: this.officeEntry(job, 'refused', data), signature: null, key: null });
      return { ...refused };
    }
    const row = this.append(job, pushed, typeof pin === 'object' ? { pin } : {});
    return { verdict: 'recorded', seq: row.recorded.seq, hash: row.hash };
  }

  private async whyForged({ entry, signature, key }: Pushed): Promise<string | undefined> {
    const known = this.keys.get(key);
    if (known?.person !== entry.by || known.device !== entry.device) return 'The key is not the author’s.';
    const publicKey = await webcrypto.subtle.importKey(
      'raw',
      known.point,
      { name: 'ECDSA', namedCurve: 'P-256' },
      false,
      ['verify'],
    );
    const holds = await webcrypto.subtle.verify(
      { name: 'ECDSA', hash: 'SHA-256' },
      publicKey,
      fromBase64url(signature),
      new TextEncoder().encode(contentHash(entry, sha256)),
    );
    return holds ? undefined : 'The signature does not hold.';
  }

  private async checkPin({ entry, sealed }: Pushed) {
    if (entry.kind !== 'signed') return undefined;
    if (!sealed) return 'wrong' as const;
    const recipient = await suite().createRecipientContext({
      recipientKey: (await this.sealingKey()).privateKey,
      enc: fromBase64url(sealed.enc).buffer,
    });
    const bound = new TextEncoder().encode(`${entry.id}.${entry.data.covers.digest}`);
    const opened = await recipient.open(fromBase64url(sealed.ciphertext).buffer, bound.buffer);
    const isRight = new TextDecoder().decode(opened) === this.pins.get(entry.by);
    return isRight ? { keyId: sealed.keyId, checkedAt: this.stamp() } : ('wrong' as const);
  }

  private append(
    job: JobRecord,
    { entry, signature, key }: { entry: Entry; signature: string | null; key: string | null },
    extra: object = {},
  ): Row {
    const recorded = {
      ...entry,
      seq: job.rows.length + 1,
      recordedAt: this.stamp(),
      prev: job.rows.at(-1)?.hash ?? NO_HASH,
      clockOffsetMs: 0,
      ...extra,
    };
    const row = { recorded, hash: chainHash(recorded, sha256), signature, key };
    job.rows.push(row);
    return row;
  }

  private officeEntry(
    job: JobRecord,
    kind: 'opened' | 'plan-moved' | 'refused' | 'erased',
    data: object,
  ): Entry {
    const number = (job.numbers.office ?? 0) + 1;
    job.numbers.office = number;
    const isOpening = kind !== 'refused';
    return {
      ...{ v: 1, id: this.newId(), job: job.id, plan: job.plan, basis: job.rows.length },
      ...{ workshop: this.workshop.seq, kind, by: isOpening ? 'sup' : 'workshop' },
      author: isOpening ? { name: 'S. Visor', roles: ['supervisor'] } : { name: 'Workshop', roles: [] },
      ...{ with: [], device: 'office', deviceSeq: number, at: this.stamp(), data },
    } as unknown as Entry;
  }

  private stamp(): string {
    return new Date(this.clock).toISOString();
  }

  private newId(): string {
    this.count += 1;
    return `0190a0a0-0000-7000-9000-${String(this.count).padStart(12, '0')}`;
  }
}

const WRONG_PIN = { verdict: 'refused' as const, code: 'pin-wrong', reason: 'The PIN was wrong.' };

function refusal(status: number, code: string, message: string): [number, unknown] {
  return [status, { error: { code, message } }];
}

function headOf(job: JobRecord): { seq: number; hash: string } {
  return { seq: job.rows.length, hash: job.rows.at(-1)?.hash ?? NO_HASH };
}

function listed(job: JobRecord) {
  const { id, number, plan, people } = job;
  return {
    id,
    number,
    label: `Job ${number}`,
    engine: 'T4',
    plan,
    phase: 'running',
    head: headOf(job),
    people,
  };
}
