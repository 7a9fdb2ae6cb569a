import { describe, expect, it, vi } from 'vitest';
import { POST as postSignIn } from '@/pages/api/auth/sign-in';
import { POST as postSignOut } from '@/pages/api/auth/sign-out';
import { POST as postSwitch } from '@/pages/api/auth/switch';
import { GET as getMe } from '@/pages/api/me/index';
import { POST as postPassword } from '@/pages/api/me/password';
import { POST as postLink } from '@/pages/api/people/[id]/password-link';
import { POST as postSetPassword } from '@/pages/api/set-password';
import { DAY, MINUTE } from '@/server/clock';
import { openTestApp } from '../support/database';
import { addTestPeople, newBrowser, signIn, TEST_PASSWORD } from '../support/requests';

const technicians = { ines: ['technician'], bram: ['technician'] } as const;

describe('signing in', () => {
  it('shows who is signed in', async () => {
    const { ines } = await addTestPeople(await openTestApp(), technicians);
    const browser = await signIn(ines);
    expect(await browser.ask(getMe)).toMatchObject({
      status: 200,
      body: {
        actor: { personId: ines.personId, name: 'Test ines', roles: ['technician'], hasPin: false },
        sideBySide: [{ personId: ines.personId, isActive: true }],
      },
    });
  });

  it('refuses a wrong password and an unknown address alike', async () => {
    const { ines } = await addTestPeople(await openTestApp(), technicians);
    const wrong = await newBrowser().ask(postSignIn, {
      body: { email: ines.email, password: 'not the password' },
    });
    const unknown = await newBrowser().ask(postSignIn, {
      body: { email: 'nobody@witnessmark.example', password: TEST_PASSWORD },
    });
    expect(wrong).toMatchObject({ status: 401, body: { error: { code: 'wrong-sign-in' } } });
    expect(unknown.body).toEqual(wrong.body);
  });

  it('is limited per address, whatever the browser says about itself', async () => {
    await addTestPeople(await openTestApp(), technicians);
    const statuses: number[] = [];
    for (let attempt = 0; attempt < 32; attempt += 1) {
      const body = { email: `nobody${attempt}@witnessmark.example`, password: 'guess after guess' };
      const headers = { 'x-forwarded-for': `198.51.100.${attempt}` };
      statuses.push((await newBrowser().ask(postSignIn, { body, headers })).status);
    }
    expect(statuses.slice(0, 30)).toEqual(Array.from({ length: 30 }, () => 401));
    expect(statuses.slice(30)).toEqual([429, 429]);
  }, 30_000);

  describe('is limited per account', () => {
    const WRONG = 'guess after guess';

    /** Tries an account from a new address each time, so that no limit on an address is met. */
    const tryOften = async (email: string, times: number, password = WRONG) => {
      const answers = [];
      for (let n = 0; n < times; n += 1) {
        const headers = { 'x-client-address': `198.51.100.${n}` };
        answers.push(await newBrowser().ask(postSignIn, { body: { email, password }, headers }));
      }
      return answers;
    };

    it('from however many addresses, for a quarter of an hour, and says how long', async () => {
      const app = await openTestApp();
      const { ines } = await addTestPeople(app, technicians);
      const warned = vi.spyOn(app.log, 'warn');
      const first = await tryOften(ines.email, 10);
      expect(first.map(({ status }) => status)).toEqual(Array.from({ length: 10 }, () => 401));
      app.clock.advance(3 * MINUTE);
      const [over] = await tryOften(ines.email.toUpperCase(), 1, TEST_PASSWORD);
      expect(over).toMatchObject({ status: 429, body: { error: { code: 'too-many-attempts' } } });
      expect(JSON.stringify(over!.body)).toContain('Wait 12 minutes and try again');
      expect(warned).toHaveBeenCalledWith(
        { person: ines.personId, from: '198.51.100.0', minutes: 12 },
        expect.stringContaining('tried too often'),
      );
      app.clock.advance(12 * MINUTE);
      expect(await tryOften(ines.email, 1, TEST_PASSWORD)).toMatchObject([{ status: 200 }]);
    }, 30_000);

    it('and tells nobody whether there is such an account', async () => {
      const { ines } = await addTestPeople(await openTestApp(), technicians);
      const here = await tryOften(ines.email, 12);
      const nowhere = await tryOften('nobody@witnessmark.example', 12);
      const told = (answers: typeof here) => answers.map(({ status, body }) => ({ status, body }));
      expect(told(nowhere)).toEqual(told(here));
      expect(here.at(-1)?.status).toBe(429);
    }, 30_000);

    it('and touches no other account; a right password begins anew', async () => {
      const { ines, bram } = await addTestPeople(await openTestApp(), technicians);
      await tryOften(ines.email, 9);
      expect(await tryOften(ines.email, 1, TEST_PASSWORD)).toMatchObject([{ status: 200 }]);
      expect((await tryOften(ines.email, 11)).map(({ status }) => status).slice(-2)).toEqual([401, 429]);
      expect(await tryOften(bram.email, 1, TEST_PASSWORD)).toMatchObject([{ status: 200 }]);
    }, 30_000);

    it('also when many try at once', async () => {
      const { ines } = await addTestPeople(await openTestApp(), technicians);
      const answers = await Promise.all(
        Array.from({ length: 15 }, (_, n) =>
          newBrowser().ask(postSignIn, {
            body: { email: ines.email, password: WRONG },
            headers: { 'x-client-address': `198.51.100.${n}` },
          }),
        ),
      );
      expect(answers.filter(({ status }) => status === 401)).toHaveLength(10);
      expect(answers.filter(({ status }) => status === 429)).toHaveLength(5);
    }, 30_000);

    it('and a new password by the owner’s link lets its person in at once', async () => {
      const { owner, ines } = await addTestPeople(await openTestApp(), technicians);
      await tryOften(ines.email, 11);
      const office = await signIn(owner);
      const { body } = await office.ask(postLink, { body: {}, params: { id: ines.personId } });
      const token = new URL((body as { link: string }).link).searchParams.get('token');
      const password = 'a fresh password';
      await newBrowser().ask(postSetPassword, { body: { token, password } });
      expect(await tryOften(ines.email, 1, password)).toMatchObject([{ status: 200 }]);
    }, 30_000);

    it('and keeps no trace of made-up accounts for longer than that', async () => {
      const app = await openTestApp();
      const { ines } = await addTestPeople(app, technicians);
      for (let n = 0; n < 5; n += 1) await tryOften(`made-up-${n}@witnessmark.example`, 1);
      app.clock.advance(15 * MINUTE);
      await tryOften(ines.email, 1);
      expect(await app.db.selectFrom('attempt_count').selectAll().execute()).toHaveLength(1);
    }, 30_000);
  });

  it('lets several people stay signed in side by side and changes who is active', async () => {
    const { ines, bram } = await addTestPeople(await openTestApp(), technicians);
    const tablet = await signIn(ines);
    await signIn(bram, tablet);
    expect((await tablet.ask(getMe)).body).toMatchObject({ actor: { personId: bram.personId } });

    expect((await tablet.ask(postSwitch, { body: { person: ines.personId } })).status).toBe(200);
    const { body } = await tablet.ask(getMe);
    expect(body).toMatchObject({ actor: { personId: ines.personId } });
    expect(body).toHaveProperty('sideBySide.length', 2);
  });

  it('signs one person out and leaves the others signed in', async () => {
    const { ines, bram } = await addTestPeople(await openTestApp(), technicians);
    const tablet = await signIn(bram, await signIn(ines));
    expect((await tablet.ask(postSignOut, { body: {} })).status).toBe(200);
    expect((await tablet.ask(getMe)).body).toMatchObject({
      actor: { personId: ines.personId },
      sideBySide: [{ personId: ines.personId }],
    });
  });

  it('does not let a browser become somebody who is not signed in there', async () => {
    const { ines, bram } = await addTestPeople(await openTestApp(), technicians);
    const tablet = await signIn(ines);
    const answer = await tablet.ask(postSwitch, { body: { person: bram.personId } });
    expect(answer).toMatchObject({ status: 401, body: { error: { code: 'not-signed-in' } } });
  });

  it('keeps more people than a shift has at one tablet', async () => {
    const app = await openTestApp();
    const names = Array.from({ length: 9 }, (_, index) => `tech${index}`);
    const people = await addTestPeople(
      app,
      Object.fromEntries(names.map((name) => [name, ['technician'] as const])),
    );
    const tablet = newBrowser();
    for (const name of names) await signIn(people[name]!, tablet);
    expect((await tablet.ask(getMe)).body).toHaveProperty('sideBySide.length', 9);
  }, 30_000);

  it('slides while it is used, with its place among the others at the tablet', async () => {
    const app = await openTestApp();
    const { ines } = await addTestPeople(app, technicians);
    const tablet = await signIn(ines);
    // As if the session had been used last two days ago.
    const expiresAt = new Date(Date.now() + 28 * DAY).toISOString();
    await app.db.updateTable('session').set({ expiresAt }).execute();
    const { headers } = await tablet.ask(getMe);
    const names = headers.getSetCookie().map((cookie) => cookie.split('=')[0]);
    expect(names).toContain('witnessmark.session_token');
    expect(names.filter((name) => name?.includes('_multi-'))).toHaveLength(1);
    const { expiresAt: slid } = await app.db
      .selectFrom('session')
      .select('expiresAt')
      .executeTakeFirstOrThrow();
    expect(new Date(slid).getTime()).toBeGreaterThan(Date.now() + 29 * DAY);
  });

  it('has no cookie that a script can read', async () => {
    const { ines } = await addTestPeople(await openTestApp(), technicians);
    const { headers } = await newBrowser().ask(postSignIn, {
      body: { email: ines.email, password: TEST_PASSWORD },
    });
    expect(headers.getSetCookie()).toHaveLength(2);
    for (const cookie of headers.getSetCookie()) expect(cookie).toMatch(/HttpOnly; SameSite=Lax/);
  });

  it('uses secure cookies behind HTTPS', async () => {
    const { ines } = await addTestPeople(
      await openTestApp({ publicUrl: 'https://workshop.example' }),
      technicians,
    );
    const { headers } = await newBrowser().ask(postSignIn, {
      body: { email: ines.email, password: TEST_PASSWORD },
    });
    for (const cookie of headers.getSetCookie()) expect(cookie).toMatch(/^__Secure-witnessmark.*Secure/);
  });
});

describe('one’s own password', () => {
  it('is changed with the old one, and ends the sessions elsewhere', async () => {
    const { ines } = await addTestPeople(await openTestApp(), technicians);
    const here = await signIn(ines);
    const elsewhere = await signIn(ines);
    const next = 'quite another password';
    expect((await here.ask(postPassword, { body: { current: TEST_PASSWORD, next } })).status).toBe(200);
    expect((await here.ask(getMe)).status).toBe(200);
    expect((await elsewhere.ask(getMe)).status).toBe(401);
    expect(
      (await newBrowser().ask(postSignIn, { body: { email: ines.email, password: TEST_PASSWORD } })).status,
    ).toBe(401);
    expect((await newBrowser().ask(postSignIn, { body: { email: ines.email, password: next } })).status).toBe(
      200,
    );
  });

  it('cannot be found out by trying at an open session', async () => {
    const app = await openTestApp();
    const { ines } = await addTestPeople(app, technicians);
    const browser = await signIn(ines);
    const guess = { current: 'a wrong password', next: 'quite another password' };
    for (let attempt = 0; attempt < 10; attempt += 1) {
      expect(await browser.ask(postPassword, { body: guess })).toMatchObject({
        status: 400,
        body: { error: { code: 'wrong-password', field: 'current' } },
      });
    }
    const right = { ...guess, current: TEST_PASSWORD };
    expect((await browser.ask(postPassword, { body: right })).status).toBe(429);
    app.clock.advance(15 * 60_000);
    expect((await browser.ask(postPassword, { body: right })).status).toBe(200);
  }, 30_000);
});

describe('the sign-in library', () => {
  it('is not mounted: nobody can sign up, rename themselves or sign everybody out through it', async () => {
    const app = await openTestApp();
    const closed = [
      '/sign-up/email',
      '/update-user',
      '/change-email',
      '/delete-user',
      '/verify-password',
      '/sign-out',
    ];
    for (const path of closed) {
      const request = new Request(`http://localhost:4321/api/auth${path}`, { method: 'POST', body: '{}' });
      expect((await app.auth.handler(request)).status, path).toBe(404);
    }
    const routes = Object.keys(import.meta.glob('/src/pages/api/auth/**/*.ts'));
    expect(routes.sort()).toEqual(
      ['sign-in', 'sign-out', 'switch'].map((name) => `/src/pages/api/auth/${name}.ts`),
    );
  });
});
