import { describe, expect, it } from 'vitest';
import { angleTool, buildWorkshop, Journal, torqueTool } from '../../tests/support/journal';
import { smallPlan } from '../../tests/support/small-documents';
import type { Recorded } from './entry';
import { nextSteps, progressOf, replay } from './job';
import { photosOf } from './job-photos';
import { markCount } from './job-signing-rules';

const begin = () => new Journal(smallPlan());
const first = (journal: Journal) => nextSteps(journal.state)[0]?.id;

describe('a whole job', () => {
  it('runs from its opening to its handover', () => {
    const journal = begin().performUntil(null);
    expect(journal.state.phase).toBe('handed over');
    expect(journal.state.open).toEqual([]);
    expect(progressOf(journal.state).every(({ done, total }) => done === total)).toBe(true);
    expect(markCount(journal.state)).toBe(8);
    expect(journal.state.deviations).toHaveLength(4);
  });

  it('folds to the same state again from its entries', () => {
    const journal = begin().performUntil(null);
    const again = replay(new Map([['a'.repeat(64), journal.plan]]), journal.entries);
    expect(again).toEqual(journal.state);
  });

  it('has its photographs in the order in which they were taken, without those taken back', () => {
    const journal = begin().perform('strip.arrival');
    expect(photosOf(journal.state)).toMatchObject([{ subject: 'arrival', from: 'camera here' }]);
    journal.record('taken-back', { of: journal.entries.at(-1)!.id, which: 'touched by mistake, not done' });
    expect(photosOf(journal.state)).toEqual([]);
  });

  it('can be replayed up to any recorded entry', () => {
    const journal = begin().performUntil('build.caps-marked');
    const recorded = journal.entries.map((entry, i) => ({
      ...entry,
      seq: i + 1,
      recordedAt: entry.at,
      prev: '',
      clockOffsetMs: 0,
    }));
    const state = replay(new Map([['a'.repeat(64), journal.plan]]), recorded, { upTo: 5 });
    expect(state).toMatchObject({ count: 5, seq: 5 });
  });
});

describe('order', () => {
  it('says why a step cannot be done yet and what would unlock it', () => {
    const journal = begin();
    expect(journal.ask('removed', {}, { step: 'strip.sump-off' })).toMatchObject({
      ok: false,
      code: 'order',
      unlock: expect.stringContaining('Do "'),
    });
  });

  it('leaves a free section in any order', () => {
    const journal = begin();
    expect(journal.ask('counted', { count: 3 }, { step: 'strip.rags-out' }).ok).toBe(true);
    expect(journal.ask('fitted', { count: 8, lot: 'x' }, { step: 'strip.old-shell-kit' }).ok).toBe(true);
  });

  it('shows a witness point while it is fresh and never lets it stand in front of work', () => {
    const journal = begin().performUntil('strip.turn-to@stop1');
    expect(first(journal)).toBe('strip.look');
    journal.perform('strip.turn-to@stop1');
    expect(first(journal)).not.toBe('strip.look');
    expect(nextSteps(journal.state).map(({ id }) => id)).toContain('strip.look');
  });

  it('does not do a step twice', () => {
    const journal = begin().perform('strip.rags-out');
    expect(journal.ask('counted', { count: 3 }, { step: 'strip.rags-out' })).toMatchObject({
      code: 'already-done',
    });
  });

  it('refuses an entry on a step of another kind, and on a step that is not in the plan', () => {
    const journal = begin();
    expect(journal.ask('done', {}, { step: 'strip.rags-out' })).toMatchObject({ code: 'wrong-step' });
    expect(journal.ask('done', {}, { step: 'strip.nowhere' })).toMatchObject({ code: 'unknown-step' });
  });

  it('does not turn the crank while a cap is off, thread is laid or a shell is dry', () => {
    const turn = 'strip.turn-to@stop2';
    const journal = begin().performUntil('strip.choose@rod2');
    expect(journal.why(turn)).toContain('order');
    // The other rod of the stop done, only this one's state stands in the way.
    const { rods } = journal.state;
    expect(rods[2]).toMatchObject({ cap: 'off', shells: 'out' });
    journal.performUntil('strip.gauge@rod2');
    expect(journal.state.rods[2]).toMatchObject({ cap: 'off', shells: 'dry', thread: 'laid' });
    journal.performUntil(turn);
    expect(journal.state.rods[2]).toMatchObject({ cap: 'on', shells: 'oiled', thread: 'none' });
    expect(journal.why(turn)).toBe('ok');
  });
});

describe('open items', () => {
  it('holds what came off open until it is refitted, with its count and where it lies', () => {
    const journal = begin().performUntil('strip.plate-off');
    expect(journal.state.open).toContainEqual(expect.objectContaining({ step: 'strip.tray-off', count: 8 }));
    journal.performUntil('build.strap-out');
    expect(journal.state.open.map(({ step }) => step)).toEqual(['strip.strap']);
  });

  it('bars the gate that an open item endangers', () => {
    const journal = begin().performUntil('build.rags-in');
    journal.record('counted', { count: 11 }, { step: 'build.rags-in' });
    expect(journal.state.deviations.at(-1)).toMatchObject({
      rule: 'count-differs',
      words: 'rags: 12 went out, 11 came back',
    });
    expect(journal.why('build.clear-to-close')).toContain('deviation-open');
  });

  it('does not ask for the refit of what was never there', () => {
    const journal = begin().performUntil('strip.plate-off');
    journal.record('not-applicable', { reason: 'no plate on this one' }, { step: 'strip.plate-off' });
    expect(journal.status('build.plate-on')).toBe('not applicable');
  });
});

describe('the measured number', () => {
  const at = 'strip.gauge@rod2';

  it('passes a reading inside its limits at both ends', () => {
    const journal = begin().performUntil(at);
    journal.gaugeEnd(at, 'front', '0.050');
    expect(journal.status(at)).toBe('begun');
    journal.gaugeEnd(at, 'rear', '0.046');
    expect(journal.status(at)).toBe('done');
    expect(journal.state.rods[2]?.front).toMatchObject({ verdict: 'inside', place: 0.5 });
  });

  it('stops on a reading outside until it is disposed of', () => {
    const journal = begin().performUntil(at).gauge(at, '0.080', '0.078');
    expect(journal.status(at)).toBe('begun');
    expect(journal.state.deviations.map(({ rule }) => rule)).toEqual([
      'clearance-outside',
      'clearance-outside',
    ]);
    expect(journal.ask('done', {}, { step: 'strip.clean@rod2' })).toMatchObject({ ok: false });
  });

  it('accepts outside the limits only with the customer’s agreement', () => {
    const journal = begin().performUntil(at).gauge(at, '0.080', '0.050');
    const deviation = journal.state.deviations[0]!.id;
    const accept = { deviation, disposition: 'accept as is' as const, reason: 'old engine, short life' };
    expect(journal.ask('deviation-disposed', accept, { by: 'sup' })).toMatchObject({
      code: 'customer-missing',
    });
    expect(journal.ask('deviation-disposed', accept, { by: 'tech' })).toMatchObject({ code: 'role' });
    journal.record(
      'deviation-disposed',
      { ...accept, customerAgreed: { when: '2026-06-02 10:00', how: 'by telephone' } },
      { by: 'sup' },
    );
    expect(journal.status(at)).toBe('done');
  });

  it('sends a rework back to the choice of shells, and voids the readings', () => {
    const journal = begin().performUntil(at).gauge(at, '0.080', '0.050');
    const deviation = journal.state.deviations[0]!.id;
    journal.record(
      'deviation-disposed',
      { deviation, disposition: 'rework', reason: 'another grade' },
      { by: 'sup' },
    );
    expect(first(journal)).toBe('strip.choose@rod2');
    expect(journal.state.rods[2]).toMatchObject({ front: undefined, rear: undefined });
    expect(journal.state.rods[2]?.voidReadings).toHaveLength(2);
    journal.performUntil('strip.clean@rod2');
    expect(journal.state.bolts['2A']?.used.old).toBe(2);
  });

  it('voids the readings when other shells are chosen, and needs a reason for it', () => {
    const journal = begin().performUntil('strip.clean@rod2');
    const shells = { upper: { grade: 'red', lot: 'S-2' }, lower: { grade: 'blue', lot: 'S-1' } };
    expect(journal.ask('chose-shells', shells, { step: 'strip.choose@rod2' })).toMatchObject({
      code: 'reason-missing',
    });
    journal.record(
      'chose-shells',
      { ...shells, reason: 'the other was scratched' },
      { step: 'strip.choose@rod2' },
    );
    expect(first(journal)).toBe('strip.lay@rod2');
    expect(journal.status(at)).toBe('open');
  });

  it('asks for a second reading when unsure, and for the supervisor when two agree', () => {
    const journal = begin().performUntil(at).gauge(at, '0.067', '0.060');
    expect(journal.state.deviations).toEqual([]);
    expect(journal.status(at)).toBe('begun');
    expect(
      journal.ask(
        'gauged',
        {
          end: 'front',
          by: 'band',
          clearance: '0.068',
          uncertainty: '0.005',
          unit: 'mm',
          again: 'first',
          threadLot: 'G',
          cardLot: 'G',
        },
        { step: at },
      ),
    ).toMatchObject({ code: 'already-read' });
    journal.gaugeEnd(at, 'front', '0.068', { again: 'read again' });
    expect(journal.state.deviations.map(({ rule }) => rule)).toEqual(['clearance-unsure']);
  });

  it('takes a clearance by parts only as the sum of its sizes, and a thread only with its lots', () => {
    const journal = begin().performUntil(at);
    const parts = { housingBore: '50.018', upperWall: '1.985', lowerWall: '1.985', journal: '46.000' };
    const reading = {
      end: 'front',
      clearance: '0.048',
      uncertainty: '0.002',
      unit: 'mm',
      again: 'first',
    } as const;
    const ask = (over: object) => journal.ask('gauged', { ...reading, by: 'parts', ...over }, { step: at });
    expect(ask({ parts })).toEqual({ ok: true });
    expect(ask({})).toMatchObject({ code: 'parts-missing' });
    expect(ask({ parts: { ...parts, journal: '45.999' } })).toMatchObject({ code: 'sum-differs' });
    expect(ask({ parts: { ...parts, upperWall: '0' } })).toMatchObject({ code: 'impossible' });
    expect(ask({ by: 'band' })).toMatchObject({ code: 'lot-missing' });
  });

  it('knows the cap off from the first end on where the reading takes it off', () => {
    const plan = smallPlan();
    const steps = plan.steps.map((step) =>
      step.id === at
        ? { ...step, sets: { cap: 'off' as const } }
        : step.id === 'strip.cap-off-again@rod2'
          ? { ...step, sets: {} }
          : step,
    );
    const journal = new Journal({ ...plan, steps }).performUntil(at);
    expect(journal.state.rods[2]?.cap).toBe('on');
    const { id } = journal.gaugeEnd(at, 'front', '0.048');
    expect(journal.state.rods[2]?.cap).toBe('off');
    journal.record('taken-back', { of: id, which: 'touched by mistake, not done' }, { step: at });
    expect(journal.state.rods[2]?.cap).toBe('on');
  });

  it('measures again from the thread on, with one more tightening', () => {
    const journal = begin().performUntil(at);
    journal.gaugeEnd(at, 'front', '0.067');
    journal.record('measuring-again', {}, { step: at });
    expect(first(journal)).toBe('strip.lay@rod2');
    journal.performUntil(at);
    expect(journal.state.bolts['2A']?.used.old).toBe(2);
  });

  it('asks about the rod that stands out even when it is inside', () => {
    const journal = begin().performUntil(at).gauge(at, '0.036', '0.036').performUntil('strip.gauge@rod3');
    journal.gauge('strip.gauge@rod3', '0.060', '0.060');
    expect(journal.state.deviations.at(-1)).toMatchObject({ rule: 'spread', blocks: false });
    expect(journal.status('strip.gauge@rod3')).toBe('done');
  });

  it('leaves the judgement to the supervisor where the sheet knows no limit', () => {
    const journal = begin().performUntil('build.side@rod2').perform('build.side@rod2');
    expect(journal.state.deviations.at(-1)).toMatchObject({ rule: 'no-limit-known', blocks: true });
  });
});

describe('tightening', () => {
  const at = 'build.tighten@rod2';
  const ready = () => begin().performUntil(at);

  it('takes the programme in its order only', () => {
    const journal = ready();
    const target = { kind: 'torque' as const, target: '10', tolerance: '1', unit: 'N·m' as const };
    const pull = {
      bolt: '2B',
      cycle: 0,
      stage: 0,
      target,
      how: 'confirmed' as const,
      outcome: 'done' as const,
      tool: torqueTool,
    };
    expect(journal.ask('tightened', pull, { step: at })).toMatchObject({
      code: 'order',
      why: expect.stringContaining('bolt 2A'),
    });
    expect(
      journal.ask('tightened', { ...pull, bolt: '2A', target: { ...target, target: '12' } }, { step: at }),
    ).toMatchObject({ code: 'target-differs' });
    expect(
      journal.ask('marked', { bolt: '2A', cycle: 0, stage: 0, colour: 'yellow' }, { step: at }),
    ).toMatchObject({ ok: false });
  });

  it('counts cycles per bolt, and a mark only after the last angle', () => {
    const journal = ready();
    for (let i = 0; i < 4; i += 1) journal.tightenOnce(at);
    expect(journal.state.bolts['2A']).toMatchObject({
      cyclesDone: 1,
      marked: undefined,
      used: { new: 1, old: 2 },
    });
    journal.tighten(at);
    expect(journal.state.bolts['2A']).toMatchObject({
      cyclesDone: 2,
      used: { new: 2 },
      marked: { colour: 'yellow' },
    });
    expect(journal.status(at)).toBe('done');
  });

  it('condemns a bolt turned too far; its partner is let off, it is replaced, and the cap starts again', () => {
    const journal = ready();
    for (let i = 0; i < 3; i += 1) journal.tightenOnce(at);
    journal.tightenOnce(at, {}, { how: 'typed', value: '99', outcome: 'over' });
    expect(journal.ask('bolt-replaced', { bolt: '2B', reason: 'too far' }, { step: at })).toMatchObject({
      code: 'order',
    });
    journal.tightenOnce(at);
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'released',
      data: { bolt: '2A', because: expect.any(String) },
    });
    expect(journal.state.bolts['2B']?.condemned).toBeDefined();
    journal.tightenOnce(at);
    expect(journal.state.bolts['2B']).toMatchObject({
      condemned: undefined,
      replaced: 1,
      used: { new: 0 },
      lot: 'B-2',
    });
    // Two cycles are needed and the partner has seen one of its two tightenings.
    expect(() => journal.tightenOnce(at)).toThrow(/Bolt 2A has 1 tightenings left and the programme needs 2/);
  });

  it('starts the cap again when nobody is sure, and counts it on every bolt', () => {
    const journal = begin().performUntil('strip.squeeze@rod2');
    journal.tightenOnce('strip.squeeze@rod2');
    expect(
      journal.ask('started-again', { bolts: ['2A'], reason: 'called away' }, { step: 'strip.squeeze@rod2' }),
    ).toMatchObject({ code: 'order' });
    journal.record(
      'started-again',
      { bolts: ['2A', '2B'], reason: 'called away' },
      { step: 'strip.squeeze@rod2' },
    );
    expect(journal.state.bolts['2A']?.used.old).toBe(1);
    journal.tighten('strip.squeeze@rod2');
    expect(journal.state.bolts['2A']?.used.old).toBe(2);
    expect(journal.state.bolts['2B']?.used.old).toBe(2);
  });

  it('replaces a bolt that cannot last through its programme again, and no other', () => {
    const step = 'build.tighten@rod1';
    const journal = begin().performUntil(step);
    journal.tightenOnce(step);
    expect(journal.ask('bolt-replaced', { bolt: '1A', reason: 'worn' }, { step })).toMatchObject({
      code: 'order',
    });
    journal.record('started-again', { bolts: ['1A', '1B'], reason: 'called away' }, { step });
    const torque = () => journal.tightenOnce(step);
    expect(torque).toThrow(/tightenings left/);
    for (const bolt of ['1A', '1B']) {
      journal.record('bolt-replaced', { bolt, reason: 'no tightenings left', lot: 'B-2' }, { step });
    }
    expect(journal.ask('bolt-replaced', { bolt: '1A', reason: 'worn' }, { step })).toMatchObject({
      code: 'order',
    });
    journal.tighten(step);
    expect(journal.state.bolts['1A']).toMatchObject({ used: { new: 2 }, replaced: 1 });
  });

  it('takes no tool that is missing, unknown, or past its date for class A', () => {
    const journal = ready();
    const target = { kind: 'torque' as const, target: '10', tolerance: '1', unit: 'N·m' as const };
    const pull = {
      bolt: '2A',
      cycle: 0,
      stage: 0,
      target,
      how: 'confirmed' as const,
      outcome: 'done' as const,
    };
    expect(journal.ask('tightened', pull, { step: at })).toMatchObject({ code: 'tool-missing' });
    expect(
      journal.ask('tightened', { ...pull, tool: { ...torqueTool, id: 'x' } }, { step: at }),
    ).toMatchObject({ code: 'unknown-tool' });
    expect(
      journal.ask(
        'tightened',
        { ...pull, tool: { id: 'late', name: 'Old', serial: 'TW-0', dueOn: '2026-01-31' } },
        { step: at },
      ),
    ).toMatchObject({ code: 'tool-unfit' });
    expect(journal.ask('tightened', { ...pull, tool: angleTool }, { step: at })).toMatchObject({
      code: 'tool-unfit',
    });
  });

  it('judges a reading against its tolerance', () => {
    const journal = ready();
    const target = { kind: 'torque' as const, target: '10', tolerance: '1', unit: 'N·m' as const };
    const pull = {
      bolt: '2A',
      cycle: 0,
      stage: 0,
      target,
      how: 'typed' as const,
      value: '12',
      tool: torqueTool,
    };
    expect(journal.ask('tightened', { ...pull, outcome: 'done' }, { step: at })).toMatchObject({
      code: 'outcome-differs',
    });
    expect(journal.ask('tightened', { ...pull, outcome: 'over' }, { step: at }).ok).toBe(true);
  });

  it('refuses a reading below nothing in words', () => {
    const journal = ready();
    const target = { kind: 'torque' as const, target: '10', tolerance: '1', unit: 'N·m' as const };
    const pull = {
      bolt: '2A',
      cycle: 0,
      stage: 0,
      target,
      how: 'typed' as const,
      value: '-3',
      tool: torqueTool,
    };
    expect(journal.ask('tightened', { ...pull, outcome: 'done' }, { step: at })).toMatchObject({
      code: 'impossible',
    });
  });

  it('asks about an impossible pace', () => {
    const journal = begin().performUntil(at, { afterMs: 200 });
    journal.performUntil('build.turns', { afterMs: 200 });
    expect(journal.state.remarks.filter(({ code }) => code === 'pace')).not.toEqual([]);
  });
});

describe('taking back and correcting', () => {
  it('takes back a touch by mistake: the act was not done', () => {
    const journal = begin().performUntil('build.tighten@rod2');
    journal.tightenOnce('build.tighten@rod2');
    const of = journal.entries.at(-1)!.id;
    journal.record('taken-back', { of, which: 'touched by mistake, not done' });
    expect(() => journal.tighten('build.tighten@rod2')).not.toThrow();
    expect(
      journal.entries.filter(
        (e) => e.kind === 'tightened' && e.data.bolt === '2A' && e.step === 'build.tighten@rod2',
      ),
    ).toHaveLength(5);
  });

  it('takes back done, but wrong: the bolt is condemned', () => {
    const journal = begin().performUntil('build.tighten@rod2');
    journal.tightenOnce('build.tighten@rod2');
    journal.record('taken-back', { of: journal.entries.at(-1)!.id, which: 'done, but wrong' });
    journal.tightenOnce('build.tighten@rod2');
    expect(journal.entries.at(-1)).toMatchObject({ kind: 'bolt-replaced', data: { bolt: '2A' } });
  });

  it('undoes what a mistaken touch changed on the rod', () => {
    const journal = begin().performUntil('strip.shell-look@2U');
    expect(journal.state.rods[2]?.cap).toBe('off');
    journal.record('taken-back', { of: journal.entries.at(-1)!.id, which: 'touched by mistake, not done' });
    expect(journal.state.rods[2]?.cap).toBe('on');
    expect(first(journal)).toBe('strip.cap-off@rod2');
  });

  it('opens a deviation for another act that was done, but wrong', () => {
    const journal = begin().perform('strip.arrival').perform('strip.old-shell-kit');
    journal.record('taken-back', { of: journal.entries.at(-1)!.id, which: 'done, but wrong' });
    expect(journal.state.deviations.at(-1)).toMatchObject({
      rule: 'done-wrong',
      step: 'strip.old-shell-kit',
    });
  });

  it('refuses to take back what later work stands on, and what another recorded', () => {
    const journal = begin().performUntil('strip.strap');
    const raise = journal.entries.at(-1)!.id;
    expect(
      journal.ask('taken-back', { of: raise, which: 'touched by mistake, not done' }, { by: 'mate' }),
    ).toMatchObject({ code: 'not-author' });
    journal.perform('strip.strap');
    expect(journal.ask('taken-back', { of: raise, which: 'touched by mistake, not done' })).toMatchObject({
      code: 'depended-on',
    });
  });

  it('supersedes a value, keeps who corrected as an author, and judges it anew', () => {
    const journal = begin().performUntil('strip.clean@rod2');
    const reading = journal.entries.find((e) => e.kind === 'gauged')!;
    const data = { ...reading.data, clearance: '0.080' };
    journal.record(
      'corrected',
      { of: reading.id, class: 'substantive', reason: 'misread', data },
      { by: 'sup' },
    );
    expect(journal.state.rods[2]?.front).toMatchObject({ clearance: '0.080', verdict: 'outside' });
    expect(journal.state.authors['strip.gauge@rod2']).toContain('sup');
    expect(journal.ask('done', {}, { step: 'strip.clean@rod2' })).toMatchObject({ ok: false });
  });

  it('voids the measurement of shells that were not those', () => {
    const journal = begin().performUntil('strip.clean@rod2');
    const chosen = journal.entries.find((e) => e.kind === 'chose-shells')!;
    const data = { ...chosen.data, upper: { grade: 'red', lot: 'S-3' } };
    journal.record('corrected', { of: chosen.id, class: 'substantive', reason: 'it was red', data });
    expect(journal.state.rods[2]).toMatchObject({ upper: { grade: 'red' }, front: undefined });
    expect(first(journal)).toBe('strip.lay@rod2');
  });

  it('asks for a countersign of a clerical correction under a signature, before handover', () => {
    const journal = begin().performUntil('build.rags-in');
    const chosen = journal.entries.find((e) => e.kind === 'chose-shells')!;
    expect(journal.plan.steps.find(({ id }) => id === 'build.clear-to-close')).toMatchObject({
      kind: 'hold',
    });
    journal.performUntil('build.sump-on');
    const data = { ...chosen.data, upper: { grade: 'blue', lot: 'S-7' } };
    const correction = journal.record('corrected', {
      of: chosen.id,
      class: 'clerical',
      reason: 'misread label',
      data,
    });
    expect(journal.state.signatures.every(({ reopened }) => reopened === undefined)).toBe(true);
    journal.performUntil('build.hand-over');
    expect(journal.why('build.hand-over')).toContain('countersign');
    expect(
      journal.ask('countersigned', { of: correction.id, name: 'Q. Lead' }, { by: 'tech' }),
    ).toMatchObject({ ok: false });
    journal.record('countersigned', { of: correction.id, name: 'Q. Lead' }, { by: 'lead' });
    expect(journal.why('build.hand-over')).toBe('ok');
  });

  it('refuses a correction that does not have the form of what it corrects', () => {
    const journal = begin().performUntil('strip.clean@rod2');
    const reading = journal.entries.find((e) => e.kind === 'gauged')!;
    expect(
      journal.ask('corrected', { of: reading.id, class: 'substantive', reason: 'x', data: { clearance: 5 } }),
    ).toMatchObject({ code: 'malformed' });
  });
});

describe('signing', () => {
  const hold = 'build.caps-marked';

  it('needs everything that it covers, and the signer’s own count', () => {
    const early = begin().performUntil('build.turns');
    expect(early.ask('signed', early.signedData(hold), { by: 'sup', step: hold })).toMatchObject({
      ok: false,
    });
    const journal = begin().performUntil(hold).signWorkUnder(hold);
    expect(
      journal.ask('signed', journal.signedData(hold, { count: 7 }), { by: 'sup', step: hold }),
    ).toMatchObject({ code: 'count-differs' });
    expect(
      journal.ask('signed', journal.signedData(hold, { presence: 'from photographs' }), {
        by: 'sup',
        step: hold,
      }),
    ).toMatchObject({ code: 'presence' });
    expect(journal.ask('signed', journal.signedData(hold), { by: 'tech', step: hold })).toMatchObject({
      code: 'role',
    });
    expect(journal.ask('signed', journal.signedData(hold), { by: 'sup', step: hold }).ok).toBe(true);
  });

  it('is never over own work, helpers included, unless a marked second look comes late enough', () => {
    const journal = begin()
      .performUntil('build.tighten@rod3')
      .tighten('build.tighten@rod3', { with: ['sup'] })
      .performUntil(hold)
      .signWorkUnder(hold);
    expect(journal.ask('signed', journal.signedData(hold), { by: 'sup', step: hold })).toMatchObject({
      code: 'own-work',
    });
    const second = journal.signedData(hold, { notIndependent: 'nobody else is here' });
    expect(journal.ask('signed', second, { by: 'sup', step: hold })).toMatchObject({ code: 'too-soon' });
    expect(journal.ask('signed', second, { by: 'sup', step: hold, afterMs: 31 * 60_000 }).ok).toBe(true);
  });

  it('lets work go on unchecked only where the route says so', () => {
    const proceed = begin().performUntil(hold);
    proceed.sign(hold, { checked: false });
    expect(proceed.status(hold)).toBe('done');
    const wait = begin().performUntil('build.clear-to-close');
    wait.sign('build.clear-to-close', { checked: false });
    expect(wait.status('build.clear-to-close')).toBe('begun');
    expect(wait.why('build.sump-on')).toContain('not signed');
  });

  it('bars the handover while a signature is unchecked', () => {
    const journal = begin().performUntil(hold);
    journal.sign(hold, { checked: false });
    journal.performUntil('build.hand-over');
    expect(journal.why('build.hand-over')).toContain('unchecked');
  });

  it('opens again when something is recorded on what was signed', () => {
    const journal = begin().performUntil(hold);
    journal.sign(hold);
    const mark = journal.entries.findLast((e) => e.kind === 'marked')!;
    journal.fold(journal.draft('taken-back', { of: mark.id, which: 'done, but wrong' }));
    expect(journal.state.signatures[0]?.reopened).toBeDefined();
    expect(journal.status(hold)).not.toBe('done');
  });

  it('is revoked, not corrected', () => {
    const journal = begin().performUntil(hold);
    const { id } = journal.sign(hold);
    expect(
      journal.ask('taken-back', { of: id, which: 'touched by mistake, not done' }, { by: 'sup' }),
    ).toMatchObject({ code: 'revoke' });
    journal.record('revoked', { of: id, reason: 'looked at the wrong vehicle' }, { by: 'sup' });
    expect(journal.why('build.rags-in')).toContain('not signed');
  });
});

describe('honest ways out', () => {
  it('sets a class A step aside only by a supervisor, and a hold point never', () => {
    const journal = begin().performUntil('strip.cap-off@rod2');
    const aside = { reason: 'done before' };
    expect(journal.ask('not-applicable', aside, { step: 'strip.cap-off@rod2' })).toMatchObject({
      code: 'role',
    });
    expect(journal.ask('not-applicable', aside, { step: 'strip.cap-off@rod2', by: 'sup' }).ok).toBe(true);
    expect(journal.ask('not-applicable', aside, { step: 'build.caps-marked', by: 'sup' })).toMatchObject({
      code: 'hold-point',
    });
  });

  it('waits for a part at one step and leaves others free', () => {
    const journal = begin();
    journal.record('waiting-for-part', { part: 'shells' }, { step: 'strip.old-shell-kit' });
    expect(journal.status('strip.old-shell-kit')).toBe('waiting for a part');
    expect(nextSteps(journal.state).map(({ id }) => id)).toEqual(['strip.arrival', 'strip.rags-out']);
    journal.perform('strip.arrival').perform('strip.rags-out');
    expect(journal.why('strip.raise')).toContain('waits for a part');
    journal.record('part-arrived', { lot: 'S-9' }, { step: 'strip.old-shell-kit' });
    journal.perform('strip.old-shell-kit');
    expect(journal.why('strip.raise')).toBe('ok');
  });

  it('parks and resumes; nothing else goes on in between', () => {
    const journal = begin().performUntil('strip.cap-off@rod2').perform('strip.park');
    expect(journal.state.phase).toBe('parked');
    expect(journal.ask('done', {}, { step: 'strip.cap-off@rod2' })).toMatchObject({ code: 'parked' });
    journal.perform('strip.resume').perform('strip.cap-off@rod2');
    expect(journal.state.phase).toBe('running');
    journal.perform('strip.park');
    expect(journal.state.phase).toBe('parked');
  });

  it('ends unfinished by a supervisor, and then nothing more is done', () => {
    const journal = begin().performUntil('strip.cap-off@rod2');
    journal.record(
      'ended-unfinished',
      { reason: 'crankpin damaged', open: ['sump'], notToBeRun: true },
      { by: 'sup' },
    );
    expect(journal.ask('done', {}, { step: 'strip.cap-off@rod2' })).toMatchObject({ code: 'ended' });
    expect(nextSteps(journal.state)).toEqual([]);
  });
});

describe('watch and road test', () => {
  it('lasts its minutes; an early end needs a reason and opens a deviation', () => {
    const journal = begin().performUntil('build.warm');
    journal.record('watch-started', {}, { step: 'build.warm' });
    expect(journal.ask('watch-ended', { early: false }, { step: 'build.warm' })).toMatchObject({
      code: 'too-early',
    });
    expect(journal.ask('watch-ended', { early: true }, { step: 'build.warm' })).toMatchObject({
      code: 'reason-missing',
    });
    journal.record('watch-ended', { early: true, reason: 'leak at the filter' }, { step: 'build.warm' });
    expect(journal.state.deviations.at(-1)).toMatchObject({ rule: 'watch-early' });
  });

  it('opens a deviation for a bad answer while watching', () => {
    const journal = begin().performUntil('build.warm');
    journal.record('watch-started', {}, { step: 'build.warm' });
    journal.record(
      'watch-checked',
      { check: 'pressure', ok: false, value: '0.2', unit: 'bar' },
      { step: 'build.warm' },
    );
    expect(journal.state.deviations.at(-1)).toMatchObject({
      rule: 'watch-bad',
      words: 'Stop: oil pressure, 0.2 bar',
    });
  });

  it('refuses an odometer that runs backwards', () => {
    const journal = begin().performUntil('build.drive');
    journal.record('drive-started', { odometer: '1000', unit: 'km', checks: [] }, { step: 'build.drive' });
    expect(
      journal.ask('drive-ended', { odometer: '999', unit: 'km', checks: [] }, { step: 'build.drive' }),
    ).toMatchObject({ code: 'impossible' });
  });
});

describe('people', () => {
  it('refuses people whom the workshop does not know, or who left', () => {
    const journal = begin();
    expect(journal.ask('counted', { count: 1 }, { step: 'strip.rags-out', by: 'nobody' })).toMatchObject({
      code: 'unknown-person',
    });
    expect(journal.ask('counted', { count: 1 }, { step: 'strip.rags-out', by: 'gone' })).toMatchObject({
      code: 'inactive-person',
    });
    expect(journal.ask('counted', { count: 1 }, { step: 'strip.rags-out', by: 'lead' })).toMatchObject({
      code: 'role',
    });
  });

  it('remembers who is at work and who had a hand in each step', () => {
    const journal = begin().perform('strip.rags-out', { with: ['mate'] });
    expect(journal.state.authors['strip.rags-out']).toEqual(['tech', 'mate']);
    expect(journal.state.working).toMatchObject({ by: 'tech', name: 'T. Nician' });
    journal.record('took-over', { from: 'tech', firstOfShift: true }, { by: 'mate' });
    expect(journal.state.working).toMatchObject({ by: 'mate' });
  });
});

describe('totality', () => {
  it('keeps an entry on an unknown step without throwing', () => {
    const journal = begin();
    journal.fold(journal.draft('done', {}, { step: 'strip.removed-in-a-later-plan' }));
    expect(journal.state.unstepped.at(-1)).toMatchObject({ kind: 'done' });
  });

  it('turns a recorded conflict into a deviation that blocks the step and counts both acts', () => {
    const journal = begin().performUntil('strip.squeeze@rod2').tighten('strip.squeeze@rod2');
    const again = journal.entries.findLast((e) => e.kind === 'tightened')!;
    const second = {
      ...again,
      id: '0190a0a0-0000-7000-8000-0000000fffff',
      device: 'tablet-2',
      seq: 99,
      recordedAt: again.at,
      prev: '',
      clockOffsetMs: 0,
      conflict: { code: 'already-done', why: 'tightened on two tablets' },
    };
    journal.fold(second);
    expect(journal.state.bolts['2B']?.used.old).toBe(2);
    expect(journal.why('strip.cap-off-again@rod2')).toContain('deviation-open');
  });

  it('makes one matter of what one tablet did on a step, and another of what a third did', () => {
    const journal = begin().performUntil('strip.squeeze@rod2').tighten('strip.squeeze@rod2');
    const first = journal.entries.findLast((e) => e.kind === 'tightened')!;
    const conflicting = (number: number, device: string, code = 'already-done') => {
      const id = `0190a0a0-0000-7000-8000-0000000ffff${number}`;
      const server = { seq: 99 + number, recordedAt: first.at, prev: '', clockOffsetMs: 0 };
      const conflict = { code, why: `Reason ${number}.` };
      const recorded: Recorded = { ...first, id, device, ...server, conflict };
      journal.fold(recorded);
    };
    const open = () => journal.state.deviations.map(({ words }) => words);
    conflicting(1, 'tablet-2');
    conflicting(2, 'tablet-2', 'deviation-open');
    expect(open()).toEqual(['Reason 1. 1 more record of that tablet on this step came with it.']);
    conflicting(3, 'tablet-3');
    conflicting(4, 'tablet-2');
    conflicting(5, 'tablet-2', 'number-used-twice');
    expect(open()).toEqual([
      'Reason 1. 2 more records of that tablet on this step came with it.',
      'Reason 3.',
      'Reason 5.',
    ]);
    const { id } = journal.state.deviations[0]!;
    const data = { deviation: id, disposition: 'accept as is', reason: 'looked at' } as const;
    journal.fold({ ...journal.draft('deviation-disposed', data, { by: 'sup' }), basis: 104 });
    conflicting(6, 'tablet-2');
    expect(open().at(-1)).toBe('Reason 6.');
  });

  it('lets a disposition go for the conflicting records that were known, and opens the rest as a matter of its own', () => {
    const journal = begin().performUntil('strip.squeeze@rod2').tighten('strip.squeeze@rod2');
    const first = journal.entries.findLast((e) => e.kind === 'tightened')!;
    for (const seq of [901, 902, 903, 904]) {
      const id = `0190a0a0-0000-7000-8000-000000000${seq}`;
      const server = { seq, recordedAt: first.at, prev: '', clockOffsetMs: 0 };
      const conflict = { code: 'order', why: `Reason ${seq}.` };
      const recorded: Recorded = { ...first, id, device: 'tablet-2', ...server, conflict };
      journal.fold(recorded);
    }
    const { id: deviation } = journal.state.deviations[0]!;
    const data = { deviation, disposition: 'accept as is', reason: 'looked at' } as const;
    journal.fold({ ...journal.draft('deviation-disposed', data, { by: 'sup' }), basis: 902 });
    expect(journal.state.deviations).toMatchObject([
      {
        disposed: { by: 'sup' },
        words: 'Reason 901. 1 more record of that tablet on this step came with it.',
      },
      { words: 'Reason 903. 1 more record of that tablet on this step came with it.' },
    ]);
    expect(journal.state.deviations[1]).not.toHaveProperty('disposed');
    expect(journal.why('strip.cap-off-again@rod2')).toContain('deviation-open');
  });

  it('never throws, whatever comes in whatever order', () => {
    const whole = begin().performUntil(null).entries;
    for (let seed = 1; seed <= 15; seed += 1) {
      const shuffled = whole
        .map((entry, i) => ({ entry, at: Math.sin(seed * 1000 + i * 7) }))
        .sort((a, b) => a.at - b.at);
      const journal = new Journal(smallPlan(), buildWorkshop());
      expect(() => {
        for (const { entry } of shuffled) journal.fold(entry);
      }).not.toThrow();
    }
  });
});
