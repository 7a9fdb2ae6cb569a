import { describe, expect, it } from 'vitest';
import { GET as getPins, POST as postPin } from '@/pages/api/pins/index';
import { POST as postCheck } from '@/pages/api/pins/check';
import { HOUR, MINUTE } from '@/server/clock';
import { checkPin, hashNewPin, isEasyPin, lockMs, storePin } from '@/server/pins';
import { openTestApp } from '../support/database';
import { addTestPeople, signIn, TEST_PASSWORD } from '../support/requests';

const RIGHT = '418306';
const WRONG = '590271';

async function withPin() {
  const app = await openTestApp();
  const people = await addTestPeople(app, { ines: ['technician'] });
  const hashed = await hashNewPin(RIGHT);
  await app.db.transaction().execute((trx) => storePin(trx, people.ines, hashed, app));
  const check = (pin: string) => checkPin(app, people.ines.personId, pin, { purpose: 'a test' });
  return { app, check, ...people };
}

describe('a signing PIN', () => {
  it('is set by its person with their password, and the workshop trail says so without it', async () => {
    const app = await openTestApp();
    const { ines } = await addTestPeople(app, { ines: ['technician'] });
    const browser = await signIn(ines);
    const bad = await browser.ask(postPin, { body: { pin: RIGHT, password: 'not my password' } });
    expect(bad).toMatchObject({
      status: 400,
      body: { error: { code: 'wrong-password', field: 'password' } },
    });
    expect((await browser.ask(getPins)).body).toMatchObject({ hasPin: false });

    expect((await browser.ask(postPin, { body: { pin: RIGHT, password: TEST_PASSWORD } })).status).toBe(200);
    expect((await browser.ask(postCheck, { body: { pin: RIGHT } })).body).toEqual({ result: 'right' });
    const last = await app.db
      .selectFrom('workshop_entry')
      .selectAll()
      .orderBy('seq', 'desc')
      .executeTakeFirstOrThrow();
    expect(last).toMatchObject({ kind: 'pin-set', by_person: ines.personId });
    expect(last.body).not.toContain(RIGHT);
  });

  it('has six digits that are not the first a stranger would try', async () => {
    expect(
      ['111111', '123456', '654321', '121212', '123123', '890123'].filter((pin) => !isEasyPin(pin)),
    ).toEqual([]);
    expect([RIGHT, WRONG, '112233'].filter(isEasyPin)).toEqual([]);
    const app = await openTestApp();
    const { ines } = await addTestPeople(app, { ines: ['technician'] });
    const browser = await signIn(ines);
    for (const pin of ['12345', '1234567', 'abcdef', '123456']) {
      const answer = await browser.ask(postPin, { body: { pin, password: TEST_PASSWORD } });
      expect(answer, pin).toMatchObject({
        status: 400,
        body: { error: { code: 'invalid-field', field: 'pin' } },
      });
    }
  });

  it('is locked after five wrong attempts, also for the right PIN, until a quarter of an hour is over', async () => {
    const { app, check } = await withPin();
    for (const left of [4, 3, 2, 1]) expect(await check(WRONG)).toEqual({ result: 'wrong', left });
    const until = new Date(app.clock.now().getTime() + 15 * MINUTE).toISOString();
    expect(await check(WRONG)).toEqual({ result: 'wrong', left: 0, lockedUntil: until });
    expect(await check(RIGHT)).toEqual({ result: 'locked', until });
    app.clock.advance(15 * MINUTE - 1);
    expect(await check(RIGHT)).toEqual({ result: 'locked', until });
    app.clock.advance(1);
    expect(await check(RIGHT)).toEqual({ result: 'right' });
    expect(await check(WRONG)).toEqual({ result: 'wrong', left: 4 });
  });

  it('is locked for longer each time until it was right', async () => {
    expect([4, 5, 6, 7, 30].map(lockMs)).toEqual([0, 15 * MINUTE, 30 * MINUTE, HOUR, 24 * HOUR]);
    const { app, check } = await withPin();
    for (let attempt = 0; attempt < 5; attempt += 1) await check(WRONG);
    app.clock.advance(15 * MINUTE);
    const until = new Date(app.clock.now().getTime() + 30 * MINUTE).toISOString();
    expect(await check(WRONG)).toEqual({ result: 'wrong', left: 0, lockedUntil: until });
  });

  it('counts attempts that come all at once', async () => {
    const { check } = await withPin();
    const answers = await Promise.all(Array.from({ length: 12 }, () => check(WRONG)));
    expect(answers.filter(({ result }) => result === 'wrong')).toHaveLength(5);
    expect(answers.filter(({ result }) => result === 'locked')).toHaveLength(7);
  });

  it('shows its person every attempt and what it was for', async () => {
    const { check, ines } = await withPin();
    await check(WRONG);
    await check(RIGHT);
    const { body } = await (await signIn(ines)).ask(getPins);
    expect(body).toMatchObject({
      hasPin: true,
      lockedUntil: null,
      attempts: [
        { outcome: 'right', purpose: 'a test', tablet: null },
        { outcome: 'wrong', purpose: 'a test', tablet: null },
      ],
    });
  });

  it('that is not set is told apart from a wrong one', async () => {
    const { app, owner } = await withPin();
    expect(await checkPin(app, owner.personId, RIGHT, { purpose: 'a test' })).toEqual({ result: 'none set' });
  });
});
