import { describe, expect, it } from 'vitest';
import { Journal, torqueTool } from '../../tests/support/journal';
import { smallPlan } from '../../tests/support/small-documents';
import type { Entry, EntryData, EntryKind, EntryOf } from './entry';
import { evidenceFor } from './job';
import { dueCountersigns } from './job-countersign';
import { DONE_PAST, donePast } from './job-evidence';
import type { PlanStep } from './plan';
import { signatureView } from './signature-view';

const HOLD = 'build.caps-marked';
const GAUGE = 'strip.gauge@rod2';
const begin = () => new Journal(smallPlan());

function entryOf<K extends EntryKind>(journal: Journal, kind: K, step?: string): EntryOf<K> {
  const found = journal.entries.find((one) => one.kind === kind && (step === undefined || one.step === step));
  if (!found) throw new Error(`there is no entry "${kind}"`);
  return found as Entry & EntryOf<K>;
}

/** A correction of an entry, with some of its fields otherwise. */
function corrected<K extends EntryKind>(
  of: EntryOf<K>,
  over: Partial<EntryData<K>>,
  isClass: 'clerical' | 'substantive' = 'substantive',
): EntryData<'corrected'> {
  return { of: of.id, class: isClass, reason: 'misread', data: { ...of.data, ...over } };
}

/** Signed, and some work done past it. */
function past(): Journal {
  return begin().performUntil('build.clear-to-close');
}

describe('who may correct', () => {
  it('is the author, or a supervisor; another technician is not', () => {
    const journal = begin().performUntil('strip.clean@rod2');
    const change = corrected(entryOf(journal, 'gauged'), { clearance: '0.047' });
    expect(journal.ask('corrected', change, { by: 'mate' })).toMatchObject({
      code: 'not-author',
      why: expect.stringContaining('T. Nician'),
    });
    expect(journal.ask('corrected', change, { by: 'lead' })).toMatchObject({ code: 'role' });
    expect(journal.ask('corrected', change).ok).toBe(true);
    expect(journal.ask('corrected', change, { by: 'sup' }).ok).toBe(true);
  });

  it('counts as an author of that work, so that they can’t be its witness', () => {
    const journal = begin().performUntil(HOLD);
    const pull = entryOf(journal, 'tightened', 'build.tighten@rod2');
    journal.record('corrected', corrected(pull, { value: '10', how: 'typed' }), {
      by: 'sup',
      with: ['lead'],
    });
    journal.signWorkUnder(HOLD);
    for (const by of ['sup', 'lead'])
      expect(journal.ask('signed', journal.signedData(HOLD), { by, step: HOLD })).toMatchObject({
        ok: false,
      });
    expect(journal.state.authors['build.tighten@rod2']).toEqual(['tech', 'sup', 'lead']);
  });
});

describe('what a correction may say', () => {
  it('may not call clerical what changes a reading', () => {
    const journal = begin().performUntil('strip.clean@rod2');
    const gauged = entryOf(journal, 'gauged');
    expect(journal.ask('corrected', corrected(gauged, { clearance: '0.047' }, 'clerical'))).toMatchObject({
      code: 'not-clerical',
    });
    expect(journal.ask('corrected', corrected(gauged, { threadLot: 'G-2' }, 'clerical')).ok).toBe(true);
    expect(journal.ask('corrected', corrected(gauged, {}))).toMatchObject({ code: 'no-change' });
  });

  it('may not name another bolt, cycle, stage or target', () => {
    const journal = begin().performUntil(HOLD);
    const pull = entryOf(journal, 'tightened', 'build.tighten@rod2');
    const target = { ...pull.data.target, target: '12' };
    for (const over of [{ bolt: '2B' }, { cycle: 1 }, { stage: 1 }, { target }])
      expect(journal.ask('corrected', corrected(pull, over))).toMatchObject({ code: 'other-act' });
    expect(journal.ask('corrected', corrected(pull, { value: '14', how: 'typed' }))).toMatchObject({
      code: 'outcome-differs',
    });
    const late = { id: 'late', name: 'Old', serial: 'TW-0', dueOn: '2026-01-31' };
    expect(journal.ask('corrected', corrected(pull, { tool: late }))).toMatchObject({ code: 'tool-unfit' });
    expect(journal.ask('corrected', corrected(pull, { value: '14', how: 'typed', outcome: 'over' })).ok).toBe(
      true,
    );
  });

  it('lets a value be put right whose tool was withdrawn since', () => {
    const journal = begin().performUntil(HOLD);
    const pull = entryOf(journal, 'tightened', 'build.tighten@rod2');
    journal.workshop.tools.find(({ id }) => id === torqueTool.id)!.state = 'withdrawn';
    expect(journal.ask('corrected', corrected(pull, { value: '10', how: 'typed' })).ok).toBe(true);
  });

  it('knows only the grades of the sheet, the same end, and the same unit', () => {
    const journal = begin().performUntil('strip.clean@rod2');
    const chosen = entryOf(journal, 'chose-shells');
    expect(
      journal.ask('corrected', corrected(chosen, { upper: { grade: 'purple', lot: 'S-1' } })),
    ).toMatchObject({ code: 'unknown-grade' });
    const gauged = entryOf(journal, 'gauged');
    expect(journal.ask('corrected', corrected(gauged, { end: 'rear' }))).toMatchObject({ code: 'other-act' });
    journal.performUntil('build.rags-in');
    const read = entryOf(journal, 'read');
    expect(journal.ask('corrected', corrected(read, { unit: 'in' }))).toMatchObject({ code: 'other-act' });
  });

  it('stands on the step of what it corrects, so that it can’t slip past a signature over it', () => {
    const journal = past();
    const pull = entryOf(journal, 'tightened', 'build.tighten@rod2');
    const change = corrected(pull, { value: '10', how: 'typed' });
    expect(journal.ask('corrected', change, { step: 'build.rags-in' })).toMatchObject({ code: 'wrong-step' });
    const forced = begin().performUntil('build.clear-to-close');
    forced.fold(forced.draft('corrected', change, { step: 'build.rags-in' }));
    expect(forced.state.signatures[0]?.reopened).toBeDefined();
  });

  it('is not about what no longer counts, nor about an act or a judgement', () => {
    const journal = begin().performUntil(GAUGE).gauge(GAUGE, '0.080', '0.050');
    const gauged = entryOf(journal, 'gauged', GAUGE);
    const deviation = journal.state.deviations[0]!.id;
    const disposed = journal.record(
      'deviation-disposed',
      { deviation, disposition: 'rework', reason: 'another grade' },
      { by: 'sup' },
    );
    expect(journal.ask('corrected', corrected(gauged, { clearance: '0.050' }))).toMatchObject({
      code: 'void',
      why: expect.stringContaining('rework'),
    });
    for (const of of [disposed.id, entryOf(journal, 'turned').id])
      expect(
        journal.ask('corrected', { of, class: 'substantive', reason: 'x', data: {} }, { by: 'sup' }),
      ).toMatchObject({ code: 'not-correctable' });
  });
});

describe('a correction under a signature', () => {
  it('that is clerical leaves it standing, and someone with no hand in it countersigns', () => {
    const journal = past();
    const pull = entryOf(journal, 'chose-shells', 'strip.choose@rod2');
    const change = corrected(pull, { upper: { ...pull.data.upper, lot: 'S-7' } }, 'clerical');
    journal.performUntil('build.sump-on');
    const { id } = journal.record('corrected', change);
    expect(journal.state.signatures.every(({ reopened }) => reopened === undefined)).toBe(true);
    expect(journal.state.countersigns).toMatchObject([{ correction: id, by: 'tech' }]);
    const sign = (by: string) => journal.ask('countersigned', { of: id, name: by }, { by });
    expect(sign('lead').ok).toBe(true);
    journal.record('countersigned', { of: id, name: 'Q. Lead' }, { by: 'lead' });
    expect(sign('sup')).toMatchObject({ code: 'already-signed' });
  });

  it('that claims to be clerical and is not opens the hold point again, however it came in', () => {
    const journal = past();
    const pull = entryOf(journal, 'tightened', 'build.tighten@rod2');
    journal.fold(journal.draft('corrected', corrected(pull, { value: '10', how: 'typed' }, 'clerical')));
    expect(journal.state.signatures[0]?.reopened).toMatch(/corrected/);
    expect(journal.state.countersigns).toEqual([]);
  });

  it('that is substantive opens the hold point, bars what comes after, and shows what was done past it', () => {
    const journal = past();
    const pull = entryOf(journal, 'tightened', 'build.tighten@rod2');
    journal.record('corrected', corrected(pull, { value: '10', how: 'typed' }));
    const [signature] = journal.state.signatures;
    expect(journal.status(HOLD)).toBe('open');
    expect(signature?.donePast).toContain('build.rags-in');
    expect(donePast(journal.state, 'build.rags-in')).toBe(signature);
    expect(journal.status('build.rags-in')).toBe('done');
    expect(signatureView(signature!, 'Europe/Lisbon').covers).toContain(DONE_PAST);
    expect(journal.why('build.sump-on')).toMatch(/^(unsigned|order)/);
    const later = journal.plan.steps.find(({ id }) => id === 'build.clear-to-close')!;
    expect(journal.why(later.id)).toContain('opened again');
    journal.sign(HOLD);
    expect(journal.why(later.id)).toBe('ok');
    expect(donePast(journal.state, 'build.rags-in')).toBeDefined();
  });

  it('is covered by signing the hold point again', () => {
    const journal = past();
    const chosen = entryOf(journal, 'chose-shells', 'strip.choose@rod2');
    journal.performUntil('build.sump-on');
    journal.record(
      'corrected',
      corrected(chosen, { upper: { ...chosen.data.upper, lot: 'S-7' } }, 'clerical'),
    );
    const close = journal.state.signatures.find(({ step }) => step === 'build.clear-to-close')!;
    journal.record('revoked', { of: close.entry, reason: 'sign it with the lot' }, { by: 'lead' });
    expect(journal.state.countersigns[0]?.countersignedBy).toBeUndefined();
    journal.sign('build.clear-to-close');
    expect(journal.state.countersigns[0]?.countersignedBy).toBe('sup');
  });
});

describe('a corrected value that leaves its limits', () => {
  it('opens a deviation by whoever corrected it, also where the earlier value had been accepted', () => {
    const journal = begin().performUntil(GAUGE).gauge(GAUGE, '0.080', '0.050');
    const accept = (deviation: string) => ({
      deviation,
      disposition: 'accept as is' as const,
      reason: 'old engine',
      customerAgreed: { when: 'today', how: 'by telephone' },
    });
    journal.record('deviation-disposed', accept(journal.state.deviations[0]!.id), { by: 'sup' });
    expect(journal.status(GAUGE)).toBe('done');
    const gauged = entryOf(journal, 'gauged', GAUGE);
    const correction = journal.record('corrected', corrected(gauged, { clearance: '0.095' }), { by: 'sup' });
    expect(journal.status(GAUGE)).toBe('begun');
    const opened = journal.state.deviations.find(({ id }) => id === `${correction.id}:clearance-outside`);
    expect(opened).toMatchObject({ blocks: true, raisedByName: 'S. Visor' });
    expect(opened?.disposed).toBeUndefined();
    journal.record('deviation-disposed', accept(opened!.id), { by: 'sup' });
    expect(journal.status(GAUGE)).toBe('done');
  });

  it('leaves the deviation open until somebody else countersigns, whoever corrected the value to inside', () => {
    for (const by of ['tech', 'sup']) {
      const journal = begin().performUntil(GAUGE).gauge(GAUGE, '0.800', '0.050');
      const change = corrected(entryOf(journal, 'gauged', GAUGE), { clearance: '0.050' });
      const { id } = journal.record('corrected', change, { by });
      const open = () => journal.state.deviations.filter(({ blocks, disposed }) => blocks && !disposed);
      expect(open().map(({ rule }) => rule)).toEqual(['clearance-outside', 'taper']);
      expect(open()[0]?.words).toContain('0.800');
      expect(journal.why('strip.clean@rod2')).toMatch(/^deviation-open/);
      const sign = (signer: string) => journal.ask('countersigned', { of: id, name: signer }, { by: signer });
      expect(sign(by)).toMatchObject({ code: by === 'sup' ? 'own-work' : 'role' });
      expect(sign('mate')).toMatchObject({ code: 'role' });
      journal.record('countersigned', { of: id, name: 'Q. Lead' }, { by: 'lead' });
      expect(open()).toEqual([]);
      expect(journal.state.deviations[0]?.words).toContain('since corrected');
      expect(journal.status(GAUGE)).toBe('done');
      expect(journal.why('strip.clean@rod2')).toBe('ok');
      expect(sign('lead')).toMatchObject({ code: 'already-signed' });
    }
  });

  it('is not countersigned by somebody who had a hand in the work, of whatever class', () => {
    const journal = begin().performUntil('build.rags-in');
    journal.record('counted', { count: 11 }, { step: 'build.rags-in', by: 'tech', with: ['lead'] });
    const counted = entryOf(journal, 'counted', 'build.rags-in');
    const { id } = journal.record('corrected', corrected(counted, { count: 12 }));
    const sign = (by: string) => journal.ask('countersigned', { of: id, name: by }, { by });
    expect(sign('lead')).toMatchObject({ code: 'own-work' });
    expect(sign('sup')).toEqual({ ok: true });
  });

  it('is disposed of instead, and then asks for no countersign any more', () => {
    const journal = begin().performUntil(GAUGE).gauge(GAUGE, '0.800', '0.050');
    const change = corrected(entryOf(journal, 'gauged', GAUGE), { clearance: '0.050' });
    const { id } = journal.record('corrected', change);
    const dispose = (deviation: string) =>
      journal.record(
        'deviation-disposed',
        { deviation, disposition: 'rework', reason: 'measure it again' },
        { by: 'sup' },
      );
    const [disposed] = journal.state.deviations.map((deviation) => dispose(deviation.id));
    const sign = () => journal.ask('countersigned', { of: id, name: 'Q. Lead' }, { by: 'lead' });
    expect(dueCountersigns(journal.state)).toEqual([]);
    expect(sign()).toMatchObject({ code: 'settled' });
    expect(journal.status(GAUGE)).toBe('open');
    journal.record('revoked', { of: disposed!.id, reason: 'too soon' }, { by: 'lead' });
    expect(dueCountersigns(journal.state)).toHaveLength(1);
    expect(sign()).toEqual({ ok: true });
  });

  it('asks for the newest correction, and lets the earlier deviation rest only where the new value has its own', () => {
    const journal = begin().performUntil(GAUGE).gauge(GAUGE, '0.800', '0.050');
    const gauged = entryOf(journal, 'gauged', GAUGE);
    const first = journal.record('corrected', corrected(gauged, { clearance: '0.050' }));
    const second = journal.record('corrected', corrected(gauged, { clearance: '0.052' }));
    const sign = (of: string) => journal.ask('countersigned', { of, name: 'Q. Lead' }, { by: 'lead' });
    expect(sign(first.id)).toMatchObject({ code: 'settled' });
    expect(sign(second.id)).toEqual({ ok: true });
    const third = journal.record('corrected', corrected(gauged, { clearance: '0.900' }));
    const open = journal.state.deviations.filter(({ blocks }) => blocks);
    expect(open.map(({ id }) => id)).toContain(`${third.id}:clearance-outside`);
    expect(open.map(({ id }) => id)).not.toContain(`${gauged.id}:clearance-outside`);
    expect(sign(second.id)).toMatchObject({ code: 'settled' });
    const fourth = journal.record('corrected', corrected(gauged, { clearance: '0.050' }));
    expect(dueCountersigns(journal.state)).toMatchObject([{ correction: fourth.id }]);
    journal.record('countersigned', { of: fourth.id, name: 'Q. Lead' }, { by: 'lead' });
    expect(journal.state.deviations.filter(({ blocks }) => blocks)).toEqual([]);
  });

  it('keeps both where one of several bad answers is corrected to good and another stays bad', () => {
    const step = 'build.drive';
    const journal = begin().performUntil(step);
    const { before, after } = journal.step(step) as PlanStep & { kind: 'drive' };
    const [first, second] = [...after, { id: 'other' }];
    const said = (...bad: (string | undefined)[]) =>
      [first, second!].map(({ id }) => ({ id, ok: !bad.includes(id) }));
    const started = {
      odometer: '1000',
      unit: 'km',
      checks: before.map(({ id }) => ({ id, ok: true })),
    } as const;
    journal.record('drive-started', started, { step });
    const data = { odometer: '1025', unit: 'km', checks: said(first.id, second?.id) } as const;
    const ended = journal.record('drive-ended', data, { step }) as Entry & EntryOf<'drive-ended'>;
    const { id } = journal.record('corrected', corrected(ended, { checks: said(second?.id) }));
    const open = () => journal.state.deviations.filter(({ blocks, disposed }) => blocks && !disposed);
    expect(open().map((one) => one.id)).toEqual([`${ended.id}:not-in-order`, `${id}:not-in-order`]);
    journal.record('countersigned', { of: id, name: 'S. Visor' }, { by: 'sup' });
    expect(open().map((one) => one.id)).toEqual([`${id}:not-in-order`]);
  });

  it('is not got round by taking the reading back and reading anew', () => {
    const journal = begin().performUntil(GAUGE);
    const { id: of } = journal.gaugeEnd(GAUGE, 'front', '0.800');
    journal.record('taken-back', { of, which: 'touched by mistake, not done' });
    journal.gauge(GAUGE, '0.048', '0.048');
    expect(journal.state.deviations.filter(({ blocks }) => blocks)).toHaveLength(1);
    expect(journal.why('strip.clean@rod2')).toMatch(/^deviation-open/);
  });

  it('asks nothing of a correction whose value was inside before and after', () => {
    const journal = begin().performUntil('strip.clean@rod2');
    journal.record('corrected', corrected(entryOf(journal, 'gauged', GAUGE), { clearance: '0.047' }));
    expect(journal.state.countersigns).toEqual([]);
    expect(journal.why('strip.clean@rod2')).toBe('ok');
  });

  it('bars the handover until then by its deviation, and a clerical one by itself', () => {
    const journal = begin().performUntil('build.drive');
    const checks = journal.step('build.drive') as PlanStep & { kind: 'drive' };
    const said = (ok: boolean) => checks.after.map(({ id }) => ({ id, ok }));
    const before = checks.before.map(({ id }) => ({ id, ok: true }));
    journal.record(
      'drive-started',
      { odometer: '1000', unit: 'km', checks: before },
      { step: 'build.drive' },
    );
    const ended = journal.record(
      'drive-ended',
      { odometer: '1025', unit: 'km', checks: said(false) },
      { step: 'build.drive' },
    ) as Entry & EntryOf<'drive-ended'>;
    const { id } = journal.record('corrected', corrected(ended, { checks: said(true) }));
    journal.performUntil('build.hand-over');
    expect(journal.why('build.hand-over')).toMatch(/^deviation-open/);
    journal.record('countersigned', { of: id, name: 'S. Visor' }, { by: 'sup' });
    expect(journal.why('build.hand-over')).toBe('ok');
  });

  it('does not ask again for an accepted reading when only its lot is mended', () => {
    const journal = begin().performUntil(GAUGE).gauge(GAUGE, '0.080', '0.050');
    const deviation = journal.state.deviations[0]!.id;
    const customerAgreed = { when: 'today', how: 'by telephone' };
    const data = { deviation, disposition: 'accept as is', reason: 'old engine', customerAgreed } as const;
    journal.record('deviation-disposed', data, { by: 'sup' });
    journal.record(
      'corrected',
      corrected(entryOf(journal, 'gauged', GAUGE), { threadLot: 'G-2' }, 'clerical'),
    );
    expect(journal.status(GAUGE)).toBe('done');
  });

  it('condemns a bolt that was turned too far in a cap that is finished, and opens a deviation', () => {
    const journal = past();
    const pull = journal.entries.findLast(
      (one): one is Entry & EntryOf<'tightened'> =>
        one.kind === 'tightened' && one.step === 'build.tighten@rod2',
    )!;
    journal.record('corrected', corrected(pull, { value: '140', how: 'typed', outcome: 'over' }));
    expect(journal.state.deviations.at(-1)).toMatchObject({
      rule: 'corrected-outside',
      blocks: true,
      step: 'build.tighten@rod2',
      words: expect.stringContaining('2B'),
    });
    expect(journal.status('build.tighten@rod2')).toBe('begun');
    expect(journal.state.bolts['2B']?.marked).toBeUndefined();
    const deviation = journal.state.deviations.at(-1)!.id;
    journal.record(
      'deviation-disposed',
      { deviation, disposition: 'replace', reason: 'new bolt' },
      { by: 'sup' },
    );
    journal.tightenOnce('build.tighten@rod2');
    journal.tightenOnce('build.tighten@rod2');
    expect(journal.entries.slice(-2)).toMatchObject([
      { kind: 'released', data: { bolt: '2A' } },
      { kind: 'bolt-replaced', data: { bolt: '2B' } },
    ]);
  });

  it('leaves a bolt barred that was condemned and by its author’s correction is not', () => {
    const step = 'build.tighten@rod2';
    const journal = begin().performUntil(step);
    journal.tightenOnce(step, {}, { value: '14', how: 'typed', outcome: 'over' });
    const pull = entryOf(journal, 'tightened', step);
    expect(journal.state.bolts['2A']?.condemned).toBeDefined();
    const change = corrected(pull, { value: pull.data.target.target, outcome: 'done' });
    const { id } = journal.record('corrected', change);
    expect(journal.state.deviations.at(-1)).toMatchObject({
      blocks: true,
      step,
      words: 'By a correction, bolt 2A was not turned too far after all',
    });
    journal.tighten(step);
    const after = journal.plan.steps.find(({ needs }) => needs.includes(step))!;
    expect(journal.why(after.id)).toMatch(/^deviation-open/);
    journal.record('countersigned', { of: id, name: 'S. Visor' }, { by: 'sup' });
    expect(journal.why(after.id)).not.toMatch(/^deviation-open/);
  });

  it('asks the supervisor about shells that are built in and were not the ones measured', () => {
    const journal = begin().performUntil(HOLD);
    const chosen = entryOf(journal, 'chose-shells', 'strip.choose@rod2');
    journal.record('corrected', corrected(chosen, { upper: { grade: 'red', lot: 'S-1' } }));
    expect(journal.state.deviations.at(-1)).toMatchObject({ rule: 'shells-differ', blocks: true });
    expect(journal.state.rods[2]).toMatchObject({ front: undefined, upper: { grade: 'red' } });
  });

  it('leaves the measurement alone where an earlier choice is corrected', () => {
    const journal = begin().performUntil(GAUGE).gauge(GAUGE, '0.080', '0.050');
    const first = entryOf(journal, 'chose-shells', 'strip.choose@rod2');
    const shells = { upper: { grade: 'red', lot: 'S-2' }, lower: { grade: 'blue', lot: 'S-1' } };
    journal.record('chose-shells', { ...shells, reason: 'too wide' }, { step: 'strip.choose@rod2' });
    journal.performUntil('strip.clean@rod2');
    journal.fold(journal.draft('corrected', corrected(first, { lower: { grade: 'red', lot: 'S-1' } })));
    expect(journal.state.rods[2]?.front).toBeDefined();
  });
});

describe('taking back', () => {
  it('is for acts: what was said, signed or raised is not taken back', () => {
    const journal = begin().performUntil('strip.strap');
    const raised = journal.record('deviation-raised', { class: 'C', words: 'scratch', blocks: false });
    const which = 'touched by mistake, not done' as const;
    expect(journal.ask('taken-back', { of: raised.id, which })).toMatchObject({ code: 'not-an-act' });
    expect(journal.ask('taken-back', { of: journal.entries[0]!.id, which }, { by: 'sup' })).toMatchObject({
      code: 'not-an-act',
    });
    const act = journal.entries.findLast(({ kind }) => kind !== 'deviation-raised')!;
    expect(journal.ask('taken-back', { of: act.id, which }, { step: 'strip.arrival' })).toMatchObject({
      code: 'wrong-step',
    });
  });

  it('draws a wrong mark anew and leaves the other bolt’s', () => {
    const step = 'build.tighten@rod2';
    const journal = begin().performUntil(step).tighten(step);
    const of = journal.entries.at(-1)!;
    expect(of).toMatchObject({ kind: 'marked', data: { bolt: '2B' } });
    journal.record('taken-back', { of: of.id, which: 'done, but wrong' });
    expect(journal.state.bolts['2B']?.marked).toBeUndefined();
    expect(journal.state.bolts['2A']?.marked).toBeDefined();
    journal.tighten(step);
    expect(journal.entries.at(-1)).toMatchObject({ kind: 'marked', data: { bolt: '2B' } });
    expect(journal.state.bolts['2B']?.marked).toBeDefined();
  });
});

describe('revoking', () => {
  it('opens the deviation again, its step with it, and the hold point over it', () => {
    const journal = begin().performUntil(GAUGE).gauge(GAUGE, '0.080', '0.078');
    const close = () => journal.state.signatures.find(({ step }) => step === 'build.clear-to-close');
    const customerAgreed = { when: 'today', how: 'by telephone' };
    const [disposed] = journal.state.deviations.map(({ id: deviation }) =>
      journal.record(
        'deviation-disposed',
        { deviation, disposition: 'accept as is', reason: 'old engine', customerAgreed },
        { by: 'sup' },
      ),
    );
    if (!disposed) throw new Error('nothing was outside');
    journal.performUntil('build.sump-on');
    expect(close()).toBeDefined();
    const isCovered = evidenceFor(journal.state, 'build.clear-to-close').some(({ id }) => id === disposed.id);
    expect(isCovered).toBe(true);
    expect(journal.ask('revoked', { of: disposed.id, reason: 'x' })).toMatchObject({ code: 'role' });
    journal.record('revoked', { of: disposed.id, reason: 'the customer says no' }, { by: 'lead' });
    expect(journal.state.deviations[0]).toMatchObject({ rule: 'clearance-outside', disposed: undefined });
    expect(journal.status(GAUGE)).toBe('begun');
    expect(close()?.reopened).toBeDefined();
  });

  it('says of a signature that it is revoked already, and what was done past it', () => {
    const journal = past();
    const of = journal.state.signatures[0]!.entry;
    journal.record('revoked', { of, reason: 'the wrong vehicle' }, { by: 'sup' });
    expect(journal.state.signatures[0]).toMatchObject({ reopened: 'revoked: the wrong vehicle' });
    expect(journal.state.signatures[0]?.donePast).toContain('build.rags-in');
    expect(journal.status(HOLD)).toBe('open');
    // Whoever revokes at a desk is not at work on the vehicle.
    expect(journal.state.working?.by).toBe('tech');
    expect(journal.ask('revoked', { of, reason: 'again' }, { by: 'sup' })).toMatchObject({
      code: 'already-open',
    });
  });

  it('lets a step behind an opened hold point that was begun come to its end', () => {
    const journal = begin().performUntil('build.warm');
    journal.record('watch-started', {}, { step: 'build.warm' });
    const { entry } = journal.state.signatures.find(({ step }) => step === HOLD)!;
    journal.record('revoked', { of: entry, reason: 'looked at the wrong heads' }, { by: 'sup' });
    expect(
      journal.ask('watch-ended', { early: true, reason: 'stopped to look' }, { step: 'build.warm' }).ok,
    ).toBe(true);
    expect(journal.ask('done', {}, { step: 'build.drive' })).toMatchObject({ ok: false });
  });
});
