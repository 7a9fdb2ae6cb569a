import { describe, expect, it } from 'vitest';
import { GET as getPeople } from '@/pages/api/people/index';
import { PATCH as patchPerson } from '@/pages/api/people/[id]/index';
import { GET as getWorkshop } from '@/pages/api/workshop/index';
import { openTestApp } from '../support/database';
import { addTestPeople, signIn } from '../support/requests';

const authorisation = {
  certificate: { number: 'T-MT-014', kind: 'master technician' },
  authorisedUntil: '2031-12-31',
};
const staff = { sup: ['supervisor'], lead: ['quality lead'], auditor: ['auditor'] } as const;

async function withSupervisor() {
  const app = await openTestApp();
  const people = await addTestPeople(app, staff);
  const office = await signIn(people.owner);
  const params = { id: people.sup.personId };
  const set = (body: object) => office.ask(patchPerson, { method: 'PATCH', params, body });
  const entries = async () => {
    const rows = await app.db
      .selectFrom('workshop_entry')
      .select('body')
      .where('kind', '=', 'authorisation-changed')
      .orderBy('seq')
      .execute();
    return rows.map(({ body }) => (JSON.parse(body) as { data: unknown }).data);
  };
  return { app, office, params, set, entries, ...people };
}

describe('an authorisation to sign', () => {
  it('is set by the owner, is an entry each time that it changes, and is what tablets judge by', async () => {
    const { office, params, set, entries } = await withSupervisor();
    expect(await set({ authorisation })).toMatchObject({ status: 200, body: authorisation });
    expect((await set({ authorisation })).status).toBe(200);
    const none = { certificate: null, authorisedUntil: null };
    expect(await entries()).toEqual([{ person: params.id, ...authorisation }]);
    const { body } = await office.ask(getWorkshop);
    const { people } = body as { people: { id: string }[] };
    expect(people.find(({ id }) => id === params.id)).toMatchObject(authorisation);
    await set({ authorisation: none });
    expect(await entries()).toEqual([
      { person: params.id, ...authorisation },
      { person: params.id, ...none },
    ]);
  });

  it('is changed by nobody else, not even for oneself, and is read by everybody', async () => {
    const { sup, lead, auditor, params, entries } = await withSupervisor();
    for (const person of [sup, lead, auditor]) {
      const browser = await signIn(person);
      const body = { authorisation };
      expect((await browser.ask(patchPerson, { method: 'PATCH', params, body })).status).toBe(403);
      expect((await browser.ask(getPeople)).status).toBe(200);
    }
    expect(await entries()).toEqual([]);
  });

  it('takes no certificate without its kind, no day that never was, and no field that it does not know', async () => {
    const { set, entries } = await withSupervisor();
    for (const wrong of [
      { ...authorisation, certificate: { number: 'T-MT-014' } },
      { ...authorisation, certificate: { number: '', kind: 'master technician' } },
      { ...authorisation, authorisedUntil: '2031-02-30' },
      { ...authorisation, authorisedUntil: 'for ever' },
      { certificate: null },
      { ...authorisation, by: 'somebody else' },
    ]) {
      expect(await set({ authorisation: wrong })).toMatchObject({
        status: 400,
        body: { error: { code: 'invalid-field' } },
      });
    }
    expect(await entries()).toEqual([]);
  });

  it('is of a person that there is', async () => {
    const { office } = await withSupervisor();
    const params = { id: 'nobody' };
    const sent = await office.ask(patchPerson, { method: 'PATCH', params, body: { authorisation } });
    expect(sent.status).toBe(404);
  });
});
