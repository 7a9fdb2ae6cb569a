import { describe, expect, it } from 'vitest';
import { GET as getMe } from '@/pages/api/me/index';
import { GET as getPeople, POST as postPeople } from '@/pages/api/people/index';
import { GET as getPerson, PATCH as patchPerson } from '@/pages/api/people/[id]/index';
import { POST as postLink } from '@/pages/api/people/[id]/password-link';
import { POST as postSetPassword } from '@/pages/api/set-password';
import { POST as postSignIn } from '@/pages/api/auth/sign-in';
import { POST as postDevices } from '@/pages/api/devices/index';
import { DAY } from '@/server/clock';
import { openTestApp } from '../support/database';
import { addTestPeople, newBrowser, signIn, TEST_PASSWORD } from '../support/requests';

const staff = { ines: ['technician'], sup: ['supervisor'] } as const;
const newcomer = { name: 'Wren Abara', email: 'wren@witnessmark.example', roles: ['technician'] };

function tokenOf(body: unknown): string {
  return new URL((body as { link: string }).link).searchParams.get('token') ?? '';
}

describe('people', () => {
  it('are added by the owner and set their own password through a link that works once', async () => {
    const { owner } = await addTestPeople(await openTestApp(), staff);
    const added = await (await signIn(owner)).ask(postPeople, { body: newcomer });
    expect(added).toMatchObject({
      status: 201,
      body: { person: { name: 'Wren Abara', hasPassword: false } },
    });

    const own = { token: tokenOf(added.body), password: 'my very own password' };
    expect((await newBrowser().ask(postSetPassword, { body: own })).status).toBe(200);
    const credentials = { email: newcomer.email, password: own.password };
    expect((await newBrowser().ask(postSignIn, { body: credentials })).status).toBe(200);
    expect(
      await newBrowser().ask(postSetPassword, { body: { ...own, password: 'another of my own' } }),
    ).toMatchObject({
      status: 410,
      body: { error: { code: 'link-used-up', field: 'token' } },
    });
  });

  it('get a new link that ends the earlier one, for three days', async () => {
    const app = await openTestApp();
    const { owner, ines } = await addTestPeople(app, staff);
    const office = await signIn(owner);
    const params = { id: ines.personId };
    const first = await office.ask(postLink, { body: {}, params });
    const second = await office.ask(postLink, { body: {}, params });
    const password = 'a fresh password';
    expect(
      (await newBrowser().ask(postSetPassword, { body: { token: tokenOf(first.body), password } })).status,
    ).toBe(410);
    app.clock.advance(3 * DAY);
    expect(
      (await newBrowser().ask(postSetPassword, { body: { token: tokenOf(second.body), password } })).status,
    ).toBe(410);
    const third = await office.ask(postLink, { body: {}, params });
    expect(
      (await newBrowser().ask(postSetPassword, { body: { token: tokenOf(third.body), password } })).status,
    ).toBe(200);
  });

  it('are changed by the owner alone', async () => {
    const { owner, ines, sup } = await addTestPeople(await openTestApp(), staff);
    for (const person of [ines, sup]) {
      const browser = await signIn(person);
      expect((await browser.ask(postPeople, { body: newcomer })).status).toBe(403);
      const change = { method: 'PATCH', params: { id: owner.personId }, body: { roles: ['technician'] } };
      expect(await browser.ask(patchPerson, change)).toMatchObject({
        status: 403,
        body: { error: { code: 'not-allowed' } },
      });
    }
  });

  it('show contact data to the owner and themselves only', async () => {
    const { owner, ines, sup } = await addTestPeople(await openTestApp(), staff);
    const seen = async (by: typeof ines) => {
      const { body } = await (await signIn(by)).ask(getPeople);
      return (body as { people: { email?: string }[] }).people
        .map((person) => person.email)
        .filter(Boolean)
        .sort();
    };
    expect(await seen(ines)).toEqual([ines.email]);
    expect(await seen(owner)).toEqual([ines.email, owner.email, sup.email].sort());
  });

  it('take several roles', async () => {
    const { owner, ines } = await addTestPeople(await openTestApp(), staff);
    const office = await signIn(owner);
    const roles = ['technician', 'quality lead'];
    const change = { method: 'PATCH', params: { id: ines.personId }, body: { roles } };
    expect(await office.ask(patchPerson, change)).toMatchObject({ status: 200, body: { roles } });
    expect((await (await signIn(ines)).ask(getMe)).body).toMatchObject({ actor: { roles } });
  });

  it('keep their name once they have signed under it', async () => {
    const { owner, ines, sup } = await addTestPeople(await openTestApp(), staff);
    const office = await signIn(owner);
    const rename = (id: string) =>
      office.ask(patchPerson, { method: 'PATCH', params: { id }, body: { name: 'New Name' } });

    expect(await rename(sup.personId)).toMatchObject({
      status: 200,
      body: { name: 'New Name', hasSigned: false },
    });
    const tablet = { id: '01970000-aaaa-7000-8000-000000000001', name: 'Bay 2' };
    expect((await (await signIn(ines)).ask(postDevices, { body: tablet })).status).toBe(201);
    expect(await rename(ines.personId)).toMatchObject({
      status: 409,
      body: { error: { code: 'conflict', field: 'name' } },
    });
    expect((await office.ask(getPerson, { params: { id: ines.personId } })).body).toMatchObject({
      name: 'Test ines',
    });
  });

  it('are deactivated, which ends their sessions at once and keeps them in the list', async () => {
    const { owner, ines } = await addTestPeople(await openTestApp(), staff);
    const office = await signIn(owner);
    const tablet = await signIn(ines);
    const change = (active: boolean) =>
      office.ask(patchPerson, { method: 'PATCH', params: { id: ines.personId }, body: { active } });
    expect(await change(false)).toMatchObject({ status: 200, body: { active: false } });
    expect((await tablet.ask(getMe)).status).toBe(401);
    const credentials = { email: ines.email, password: TEST_PASSWORD };
    expect(await newBrowser().ask(postSignIn, { body: credentials })).toMatchObject({
      status: 401,
      body: {
        error: { code: 'wrong-sign-in', message: expect.stringContaining('no longer works here') as string },
      },
    });
    expect((await office.ask(getPeople)).body).toMatchObject({
      people: expect.arrayContaining([expect.objectContaining({ id: ines.personId })]) as unknown,
    });

    expect((await change(true)).status).toBe(200);
    expect((await newBrowser().ask(postSignIn, { body: credentials })).status).toBe(200);
  });

  it('cannot be deleted, by whatever way', async () => {
    const { db } = await openTestApp().then(async (app) => {
      await addTestPeople(app, staff);
      return app;
    });
    await expect(db.deleteFrom('person').execute()).rejects.toThrow(/deactivated, never deleted/);
    await expect(db.deleteFrom('user').execute()).rejects.toThrow(/FOREIGN KEY/);
  });

  it('always keep an owner', async () => {
    const { owner } = await addTestPeople(await openTestApp(), staff);
    const office = await signIn(owner);
    const params = { id: owner.personId };
    for (const body of [{ roles: ['auditor'] }, { active: false }]) {
      expect(await office.ask(patchPerson, { method: 'PATCH', params, body })).toMatchObject({ status: 409 });
    }
  });

  it('have one e-mail address each, in whatever case it is typed', async () => {
    const { owner } = await addTestPeople(await openTestApp(), staff);
    const body = { ...newcomer, email: 'INES@witnessmark.example' };
    expect(await (await signIn(owner)).ask(postPeople, { body })).toMatchObject({
      status: 409,
      body: { error: { field: 'email' } },
    });
  });

  it('that are not there read as not found', async () => {
    const { owner } = await addTestPeople(await openTestApp(), staff);
    const answer = await (await signIn(owner)).ask(getPerson, { params: { id: 'nobody' } });
    expect(answer).toMatchObject({ status: 404, body: { error: { code: 'not-found' } } });
  });
});
