import { describe, expect, it } from 'vitest';
import { Journal } from '../../tests/support/journal';
import { smallPlan } from '../../tests/support/small-documents';
import { buildWorkshop } from '../../tests/support/journal';
import { whyNotAuthorised } from './authorisation';
import { mayRecord } from './job';

const HOLD = 'build.caps-marked';

/** A job at its hold point, in a workshop in which the supervisor's authorisation ends on a day. */
function atHold(authorisedUntil: string | null, stepId = HOLD) {
  const workshop = buildWorkshop();
  const people = workshop.people.map((one) => (one.id === 'sup' ? { ...one, authorisedUntil } : one));
  const journal = new Journal(smallPlan()).performUntil(stepId);
  journal.signWorkUnder(HOLD);
  return { journal, workshop: { ...workshop, people } };
}

describe('an authorisation to sign', () => {
  it('still counts on its last day and not on the day after', () => {
    const person = { name: 'S. Visor', authorisedUntil: '2031-05-31' };
    expect(whyNotAuthorised(person, '2031-05-31')).toEqual({ ok: true });
    expect(whyNotAuthorised(person, '2031-06-01')).toEqual({
      ok: false,
      code: 'authorisation-over',
      why: 'The authorisation of S. Visor to sign counted until 31 May 2031.',
      unlock: 'The owner renews it on the People page.',
    });
    expect(whyNotAuthorised({ name: 'S. Visor', authorisedUntil: null }, '2099-01-01').ok).toBe(true);
    expect(whyNotAuthorised({ name: 'S. Visor' }, '2099-01-01').ok).toBe(true);
  });

  it('bars the signature of a hold point once it is over, by the day in the workshop’s zone', () => {
    const { journal, workshop } = atHold('2000-01-01');
    const entry = journal.draft('signed', journal.signedData(HOLD), { by: 'sup', step: HOLD });
    expect(mayRecord(journal.state, entry, workshop)).toMatchObject({ code: 'authorisation-over' });
    const day = (authorisedUntil: string) => ({
      ...workshop,
      people: workshop.people.map((one) => (one.id === 'sup' ? { ...one, authorisedUntil } : one)),
      zone: 'Pacific/Auckland',
    });
    // 13 hours ahead of UTC: there it is the next day.
    const late = { ...entry, at: '2026-12-01T12:00:00.000Z' };
    expect(mayRecord(journal.state, late, day('2026-12-01'))).toMatchObject({ code: 'authorisation-over' });
    expect(mayRecord(journal.state, late, day('2026-12-02'))).toEqual({ ok: true });
  });

  it('bars a disposition of class A, and none of the others', () => {
    const { journal, workshop } = atHold('2000-01-01');
    for (const [deviationClass, code] of [
      ['A', 'authorisation-over'],
      ['B', undefined],
    ] as const) {
      journal.record('deviation-raised', { class: deviationClass, words: 'a scratch', blocks: false });
      const { id } = journal.state.deviations.at(-1)!;
      const data = { deviation: id, disposition: 'accept as is', reason: 'looked at' } as const;
      const verdict = mayRecord(
        journal.state,
        journal.draft('deviation-disposed', data, { by: 'sup' }),
        workshop,
      );
      expect(verdict.ok ? undefined : verdict.code).toBe(code);
    }
  });

  it.each([
    ['handed-over', { checks: [] }],
    ['countersigned', { of: '00000000-0000-4000-8000-000000000001', name: 'S. Visor' }],
  ] as const)('bars %s, whatever else speaks for it', (kind, data) => {
    const { journal, workshop } = atHold('2000-01-01');
    const verdict = mayRecord(journal.state, journal.draft(kind, data as never, { by: 'sup' }), workshop);
    expect(verdict).toMatchObject({ code: 'authorisation-over' });
  });

  it('does not bar the work itself', () => {
    const { journal, workshop } = atHold('2000-01-01');
    const note = journal.draft(
      'deviation-raised',
      { class: 'C', words: 'a note', blocks: false },
      { by: 'sup' },
    );
    expect(mayRecord(journal.state, note, workshop)).toEqual({ ok: true });
  });
});
