/*
 * A journal of one job for tests of the rules: it makes entries with growing numbers and times, asks
 * mayRecord, and folds. No signatures, no storage; `perform` does the sensible thing on any kind of step.
 */
import type { Entry, EntryData, EntryKind, Recorded } from '@/domain/entry';
import {
  applyEntry,
  emptyJob,
  evidenceFor,
  mayRecord,
  nextSteps,
  nextTightening,
  whyNot,
} from '@/domain/job';
import { markCount, unsignedUnder } from '@/domain/job-signing-rules';
import type { JobState, Verdict, Workshop } from '@/domain/job-state';
import { entryForAction } from '@/domain/job-tightening';
import { oldShells } from '@/domain/job-wear';
import { unsignedWork } from '@/domain/job-work';
import { findStep, type Plan, type PlanStep } from '@/domain/plan';
import type { WearFlag, WearGrade } from '@/domain/wear';

/** The workshop of the tests: a technician, another, a supervisor, a quality lead, and two tools in date. */
export function buildWorkshop(): Workshop {
  const tool = { cycleLimit: null, cyclesUsed: null, state: 'in use' as const, dueOn: '2026-12-31' };
  return {
    seq: 9,
    zone: 'Europe/Lisbon',
    people: [
      { id: 'tech', name: 'T. Nician', roles: ['technician'], active: true },
      { id: 'mate', name: 'M. Ate', roles: ['technician'], active: true },
      { id: 'sup', name: 'S. Visor', roles: ['supervisor'], active: true },
      { id: 'lead', name: 'Q. Lead', roles: ['quality lead'], active: true },
      { id: 'gone', name: 'G. One', roles: ['technician'], active: false },
    ],
    tools: [
      {
        ...tool,
        id: 'w1',
        name: 'Torque wrench',
        kind: 'torque wrench',
        serial: 'TW-1',
        rangeLow: '2',
        rangeHigh: '60',
        unit: 'N·m',
      },
      {
        ...tool,
        id: 'a1',
        name: 'Angle gauge',
        kind: 'angle gauge',
        serial: 'AG-1',
        rangeLow: null,
        rangeHigh: null,
        unit: null,
      },
      {
        ...tool,
        id: 'late',
        name: 'Old wrench',
        kind: 'torque wrench',
        serial: 'TW-0',
        rangeLow: '2',
        rangeHigh: '60',
        unit: 'N·m',
        dueOn: '2026-01-31',
      },
    ],
  };
}

interface Options {
  step?: string;
  by?: string;
  with?: string[];
  device?: string;
  afterMs?: number;
}

export const torqueTool = { id: 'w1', name: 'Torque wrench', serial: 'TW-1', dueOn: '2026-12-31' };
export const angleTool = { id: 'a1', name: 'Angle gauge', serial: 'AG-1', dueOn: '2026-12-31' };

export class Journal {
  state: JobState;
  entries: Entry[] = [];
  private now = Date.parse('2026-06-02T08:00:00.000Z');
  private numbers = new Map<string, number>();

  constructor(
    readonly plan: Plan,
    readonly workshop: Workshop = buildWorkshop(),
  ) {
    this.state = emptyJob(plan);
    this.record('opened', openedData, { by: 'sup' });
  }

  /** Makes the entry that `record` would, without asking or folding. */
  draft<K extends EntryKind>(kind: K, data: EntryData<K>, options: Options = {}): Entry {
    const { by = 'tech', device = 'tablet-1', afterMs = 5000 } = options;
    this.now += afterMs;
    const deviceSeq = (this.numbers.get(device) ?? 0) + 1;
    this.numbers.set(device, deviceSeq);
    const person = this.workshop.people.find(({ id }) => id === by);
    const n = this.entries.length + 1;
    return {
      v: 1,
      id: `0190a0a0-0000-7000-8000-${String(n).padStart(12, '0')}`,
      job: '0190a0a0-0000-7000-8000-00000000aaaa',
      plan: 'a'.repeat(64),
      basis: 0,
      workshop: this.workshop.seq,
      kind,
      ...(options.step === undefined ? {} : { step: options.step }),
      by,
      author: { name: person?.name ?? by, roles: person?.roles ?? [] },
      with: options.with ?? [],
      device,
      deviceSeq,
      at: new Date(this.now).toISOString(),
      data,
    } as Entry;
  }

  /** What mayRecord says of an entry, which is then forgotten. */
  ask<K extends EntryKind>(kind: K, data: EntryData<K>, options: Options = {}): Verdict {
    return mayRecord(this.state, this.draft(kind, data, options), this.workshop);
  }

  /** Records an entry that must be allowed. */
  record<K extends EntryKind>(kind: K, data: EntryData<K>, options: Options = {}): Entry {
    const entry = this.draft(kind, data, options);
    const verdict = mayRecord(this.state, entry, this.workshop);
    if (!verdict.ok)
      throw new Error(`${kind} on ${entry.step ?? 'no step'}: ${verdict.why} (${verdict.code})`);
    return this.fold(entry);
  }

  /** Folds an entry without asking: a fact from another tablet. */
  fold(entry: Entry): Entry {
    this.entries.push(entry);
    this.state = applyEntry(this.state, entry);
    return entry;
  }

  step(id: string): PlanStep {
    const step = findStep(this.plan, id);
    if (!step) throw new Error(`no step ${id}`);
    return step;
  }

  status(id: string): string | undefined {
    return this.state.steps[id]?.status;
  }

  /** Does the steps that come, in order, until this one is next (or everything is done). */
  performUntil(stepId: string | null, options: Options = {}): this {
    for (let guard = 0; guard < 2000; guard += 1) {
      const [next] = nextSteps(this.state).filter((step) => step.kind !== 'witness');
      if (!next || next.id === stepId) return this;
      this.perform(next.id, options);
    }
    throw new Error(`never came to ${stepId}`);
  }

  /** The sensible thing on a step, whatever its kind, to its end. */
  perform(stepId: string, options: Options = {}): this {
    const step = this.step(stepId);
    const on = { ...options, step: stepId };
    const checks = 'checks' in step ? step.checks.map(({ id }) => ({ id, ok: true })) : [];
    switch (step.kind) {
      case 'do':
        this.record('done', {}, on);
        break;
      case 'remove':
        this.record('removed', step.count === undefined ? {} : { count: step.count }, on);
        break;
      case 'refit':
        this.record('refitted', step.part === undefined ? {} : { lot: `lot ${step.part}` }, on);
        break;
      case 'place':
        this.record('placed', {}, on);
        break;
      case 'count':
        this.record(
          'counted',
          { count: step.side === 'out' ? 12 : (this.state.tallies[step.tally]?.out ?? 0) },
          on,
        );
        break;
      case 'inspect':
        this.record('inspected', { checks }, on);
        break;
      case 'read': {
        const limit = this.plan.limits[step.limit];
        const value = limit?.target ?? limit?.low ?? limit?.high ?? '1';
        this.record('read', { value, unit: limit?.unit ?? 'mm', how: 'typed' }, on);
        if (limit?.missing !== undefined) this.acceptLast('it moves freely');
        break;
      }
      case 'turn':
        this.record(
          'turned',
          step.toAngle === undefined ? { fullTurns: step.fullTurns ?? 1 } : { toAngle: step.toAngle },
          on,
        );
        break;
      case 'choose-shells': {
        const grade = this.plan.engine.shells.standard;
        this.record('chose-shells', { upper: { grade, lot: 'S-1' }, lower: { grade, lot: 'S-1' } }, on);
        break;
      }
      case 'grade-shells':
        this.grade(stepId, {}, options);
        break;
      case 'gauge':
        this.gauge(stepId, this.targetOf(step.limit), this.targetOf(step.limit), options);
        break;
      case 'tighten':
        this.tighten(stepId, options);
        break;
      case 'fit':
        this.record('fitted', { count: step.count, lot: `lot ${step.part}` }, on);
        break;
      case 'fill': {
        const fluid = this.plan.fluids[step.fluid];
        this.record('filled', { quantity: fluid?.quantity ?? '1', unit: fluid?.unit ?? 'L', lot: 'F-1' }, on);
        break;
      }
      case 'photograph':
        this.record(
          'photographed',
          {
            photo: 'b'.repeat(64),
            bytes: 10,
            type: 'image/jpeg',
            from: 'camera here',
            subject: step.subject,
          },
          on,
        );
        break;
      case 'watch':
        this.record('watch-started', {}, on);
        for (const check of step.checks) this.record('watch-checked', { check: check.id, ok: true }, on);
        this.record('watch-ended', { early: false }, { ...on, afterMs: Number(step.minutes) * 60_000 });
        break;
      case 'drive':
        this.record(
          'drive-started',
          { odometer: '1000', unit: 'km', checks: step.before.map(({ id }) => ({ id, ok: true })) },
          on,
        );
        this.record(
          'drive-ended',
          { odometer: '1025', unit: 'km', checks: step.after.map(({ id }) => ({ id, ok: true })) },
          on,
        );
        break;
      case 'hold':
        this.sign(stepId);
        break;
      case 'witness':
        this.record('witnessed', { holdPoint: step.holdPoint, meaning: step.meaning }, { ...on, by: 'sup' });
        break;
      case 'make-safe':
        this.record('parked', { checks }, on);
        break;
      case 'resume':
        this.record('resumed', { checks }, on);
        break;
      case 'hand-over':
        this.record('handed-over', { checks }, { ...on, by: 'sup' });
        break;
    }
    return this;
  }

  /** The supervisor accepts the newest deviation as it is. */
  acceptLast(reason: string): Entry {
    const deviation = this.state.deviations.at(-1)?.id ?? 'none';
    return this.record(
      'deviation-disposed',
      { deviation, disposition: 'accept as is', reason },
      { by: 'sup' },
    );
  }

  /** What the sheet aims at. */
  private targetOf(limit: string): string {
    return this.plan.limits[limit]?.target ?? '0.048';
  }

  /** Every old shell graded: even grey, but for those that are named. */
  grade(
    stepId: string,
    others: Record<string, { grade?: WearGrade; flags?: WearFlag[] }>,
    options: Options = {},
  ): Entry {
    const shells = oldShells(this.plan).map((place) => {
      const { grade = 0, flags = [] } = others[`${place.rod}${place.half}`] ?? {};
      return { ...place, grade, flags };
    });
    return this.record('graded', { shells }, { ...options, step: stepId });
  }

  /** Both ends of a rod read from the card. */
  gauge(stepId: string, front: string, rear: string, options: Options = {}): this {
    for (const [end, clearance] of [
      ['front', front],
      ['rear', rear],
    ] as const)
      this.gaugeEnd(stepId, end, clearance, options);
    return this;
  }

  gaugeEnd(
    stepId: string,
    end: 'front' | 'rear',
    clearance: string,
    {
      again = 'first',
      uncertainty = '0.005',
      ...options
    }: Options & { again?: 'first' | 'read again'; uncertainty?: string } = {},
  ): Entry {
    return this.record(
      'gauged',
      { end, by: 'band', clearance, uncertainty, unit: 'mm', again, threadLot: 'G-1', cardLot: 'G-1' },
      { ...options, step: stepId },
    );
  }

  /** One tightening action as it comes; false when the programme is finished. */
  tightenOnce(stepId: string, options: Options = {}, over: Partial<EntryData<'tightened'>> = {}): boolean {
    const step = this.step(stepId);
    if (step.kind !== 'tighten') throw new Error(`${stepId} is not tightened`);
    const action = nextTightening(this.state, step);
    const made = action && entryForAction(this.state, step, action);
    if (!made) return false;
    if (made.kind === 'tightened') {
      const tool = made.data.target.kind === 'angle' ? angleTool : torqueTool;
      this.record('tightened', { ...made.data, tool, ...over }, { ...options, step: stepId });
    } else if (made.kind === 'released') this.record('released', made.data, { ...options, step: stepId });
    else if (made.kind === 'marked') this.record('marked', made.data, { ...options, step: stepId });
    else this.record('bolt-replaced', { ...made.data, lot: 'B-2' }, { ...options, step: stepId });
    return true;
  }

  tighten(stepId: string, options: Options = {}): this {
    for (let guard = 0; guard < 200; guard += 1) if (!this.tightenOnce(stepId, options)) return this;
    throw new Error(`${stepId} never ended`);
  }

  signedData(stepId: string, over: Partial<EntryData<'signed'>> = {}): EntryData<'signed'> {
    const step = this.step(stepId);
    if (step.kind !== 'hold') throw new Error(`${stepId} is no hold point`);
    const evidence = evidenceFor(this.state, stepId);
    const upTo: Record<string, number> = {};
    for (const { device, deviceSeq } of evidence) upTo[device] = Math.max(upTo[device] ?? 0, deviceSeq);
    return {
      holdPoint: step.holdPoint,
      name: 'S. Visor',
      roles: ['supervisor'],
      meaning: step.meaning,
      ...(step.counts ? { count: markCount(this.state) } : {}),
      presence: 'at the vehicle',
      covers: { upTo, count: evidence.length, digest: 'd'.repeat(64) },
      ...over,
    };
  }

  /** A person signs for all that they have recorded and not signed for yet; nothing where there is nothing. */
  signWork(by = 'tech', options: Options = {}): this {
    const entries = unsignedWork(this.state, by);
    if (entries.length === 0) return this;
    const upTo: Record<string, number> = {};
    for (const { device, deviceSeq } of entries) upTo[device] = Math.max(upTo[device] ?? 0, deviceSeq);
    const covers = { upTo, count: entries.length, digest: 'e'.repeat(64) };
    this.record('work-signed', { covers }, { ...options, by });
    return this;
  }

  /** Everybody whose work a hold point covers signs for it. */
  signWorkUnder(stepId: string): this {
    const step = this.step(stepId);
    if (step.kind !== 'hold') throw new Error(`${stepId} is no hold point`);
    for (const { by } of unsignedUnder(this.state, step, this.workshop)) this.signWork(by);
    return this;
  }

  /** Signed, and its PIN checked by the server; before that its authors have signed for their work. */
  sign(stepId: string, options: Options & { checked?: boolean } = {}): Entry {
    this.signWorkUnder(stepId);
    const { checked = true, ...rest } = options;
    const entry = this.draft('signed', this.signedData(stepId), { by: 'sup', ...rest, step: stepId });
    const verdict = mayRecord(this.state, entry, this.workshop);
    if (!verdict.ok) throw new Error(`signed on ${stepId}: ${verdict.why}`);
    if (!checked) return this.fold(entry);
    const recorded: Recorded = {
      ...entry,
      seq: this.entries.length + 1,
      recordedAt: entry.at,
      prev: '0'.repeat(64),
      clockOffsetMs: 0,
      pin: { keyId: 'k1', checkedAt: entry.at },
    };
    return this.fold(recorded);
  }

  why(stepId: string): string {
    const verdict = whyNot(this.state, stepId);
    return verdict.ok ? 'ok' : `${verdict.code}: ${verdict.why}`;
  }
}

const openedData: EntryData<'opened'> = {
  number: '0147',
  engine: 'Testwell T4',
  options: { plate: 'fitted' },
  odometer: { value: '120300', unit: 'km' },
  commitments: {},
  oldParts: 'to the customer',
};
