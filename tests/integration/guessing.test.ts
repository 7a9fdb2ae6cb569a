import { describe, expect, it } from 'vitest';
import { POST as postSignIn } from '@/pages/api/auth/sign-in';
import { GET as getMe } from '@/pages/api/me/index';
import { GET as getFloorJobs } from '@/pages/api/floor/jobs';
import { GET as getWorkshop } from '@/pages/api/workshop/index';
import { POST as postSync } from '@/pages/api/sync/index';
import { MINUTE } from '@/server/clock';
import { openTestApp } from '../support/database';
import { addTestPeople, newBrowser, signIn, TEST_PASSWORD } from '../support/requests';
import { ask, enrolTestTablet, openShop, openTestJob, PIN } from '../support/tablet';

describe('a PIN', { timeout: 30_000 }, () => {
  it('cannot be guessed through a tablet: after five wrong ones in a push the rest wait untried', async () => {
    const shop = await openShop();
    const { ann, supervisor } = shop.people;
    const tablet = await enrolTestTablet(shop, [supervisor, ann]);
    const job = await openTestJob(tablet, supervisor);
    const takeOver = (pin: string) =>
      tablet.record(job.id, { kind: 'took-over', data: { firstOfShift: true } }, { by: ann, pin });
    for (let guess = 0; guess < 8; guess += 1) await takeOver(`91${guess}73${guess}`);
    await takeOver(PIN);
    const verdicts = await tablet.sync();
    const behind = 'earlier-missing';
    const expected = [...Array.from({ length: 5 }, () => 'pin-wrong'), 'pin-locked', behind, behind, behind];
    expect(verdicts.map(({ code }) => code)).toEqual(expected);
    const outcomes = await shop.app.db
      .selectFrom('pin_attempt')
      .select('outcome')
      .where('person_id', '=', ann.id)
      .execute();
    expect(outcomes.filter(({ outcome }) => outcome === 'wrong')).toHaveLength(5);
    // When the lock is over, one more wrong one locks again, for longer.
    shop.app.clock.advance(16 * MINUTE);
    tablet.now += 16 * MINUTE;
    const again = (await tablet.sync()).map(({ code }) => code);
    expect(again).toEqual(['pin-wrong', 'pin-locked', behind, behind]);
  });
});

describe('a session', { timeout: 30_000 }, () => {
  it('is never one that was there before its person signed in', async () => {
    const { owner } = await addTestPeople(await openTestApp(), {});
    const planted = 'planted.by-somebody-else';
    const browser = newBrowser();
    browser.cookies.set('witnessmark.session_token', planted);
    expect((await browser.ask(getMe)).status).toBe(401);
    await browser.ask(postSignIn, { body: { email: owner.email, password: TEST_PASSWORD } });
    const first = browser.cookies.get('witnessmark.session_token');
    expect(first).not.toBe(planted);
    const other = await signIn(owner);
    expect(other.cookies.get('witnessmark.session_token')).not.toBe(first);
    browser.cookies.set('witnessmark.session_token', `${first?.slice(0, -4)}AAAA`);
    expect((await browser.ask(getMe)).status).toBe(401);
  });
});

describe('what a tablet can ask for', () => {
  it('has no contact data in it and no secret', async () => {
    const shop = await openShop();
    const { supervisor } = shop.people;
    const tablet = await enrolTestTablet(shop, [supervisor]);
    const job = await openTestJob(tablet, supervisor);
    const pull = {
      device: tablet.device,
      sentAt: '2031-05-06T07:00:00Z',
      jobs: [{ id: job.id, have: null }],
      entries: [],
    };
    const answers = [
      await ask(getFloorJobs, { tablet: tablet.credential }),
      await ask(getWorkshop, { tablet: tablet.credential }),
      await ask(postSync, { tablet: tablet.credential, body: pull }),
    ];
    const rows = await shop.app.db.selectFrom('job_identity').selectAll().execute();
    const hidden = [
      ...rows.filter(({ field }) => field !== 'registration').map(({ value }) => value),
      ...rows.map(({ salt }) => salt),
      ...Object.values(shop.people).map(({ email }) => email),
      ...(await shop.app.db.selectFrom('signing_pin').select('hash').execute()).map(({ hash }) => hash),
    ];
    expect(hidden.length).toBeGreaterThan(10);
    for (const { status, text } of answers) {
      expect(status).toBe(200);
      for (const one of hidden) expect(text).not.toContain(one);
    }
  });
});
