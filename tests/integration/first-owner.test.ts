import { describe, expect, it } from 'vitest';
import { POST as postFirstOwner } from '@/pages/api/first-owner';
import { POST as postSignIn } from '@/pages/api/auth/sign-in';
import { GET as getWorkshop } from '@/pages/api/workshop/index';
import { HOUR } from '@/server/clock';
import { firstOwnerLink } from '@/server/one-time-links';
import { openTestApp, type TestApp } from '../support/database';
import { newBrowser } from '../support/requests';

const owner = { name: 'Petra Lund', email: 'petra@witnessmark.example', password: 'the first password' };
const workshop = { name: 'Two Bays', zone: 'Europe/Dublin' };

async function newToken(app: TestApp): Promise<string> {
  const link = await firstOwnerLink(app);
  return new URL(link ?? '').searchParams.get('token') ?? '';
}

describe('the first owner', () => {
  it('is made through the link of the start, names the workshop and opens its trail', async () => {
    const app = await openTestApp();
    const body = { token: await newToken(app), ...owner, workshop };
    expect((await newBrowser().ask(postFirstOwner, { body })).status).toBe(201);
    const browser = newBrowser();
    expect(
      (await browser.ask(postSignIn, { body: { email: owner.email, password: owner.password } })).status,
    ).toBe(200);
    expect((await browser.ask(getWorkshop)).body).toMatchObject({
      ...workshop,
      seq: 2,
      people: [{ name: owner.name, roles: ['owner'], active: true, hasPin: false }],
    });
    expect(await app.db.selectFrom('workshop_entry').select(['seq', 'kind']).execute()).toEqual([
      { seq: 1, kind: 'person-added' },
      { seq: 2, kind: 'workshop-set' },
    ]);
  });

  it('is made once: the link is used up and no other is given out', async () => {
    const app = await openTestApp();
    const body = { token: await newToken(app), ...owner, workshop };
    await newBrowser().ask(postFirstOwner, { body });
    expect((await newBrowser().ask(postFirstOwner, { body })).status).toBe(410);
    expect(await firstOwnerLink(app)).toBeUndefined();
  });

  it('needs the newest link, within a day', async () => {
    const app = await openTestApp();
    const earlier = await newToken(app);
    const newest = await newToken(app);
    const ask = async (token: string) =>
      (await newBrowser().ask(postFirstOwner, { body: { token, ...owner, workshop } })).status;
    expect(await ask(earlier)).toBe(410);
    app.clock.advance(24 * HOUR);
    expect(await ask(newest)).toBe(410);
    expect(await app.db.selectFrom('person').selectAll().execute()).toEqual([]);
  });

  it('is not made at all where the zone does not exist', async () => {
    const app = await openTestApp();
    const body = { token: await newToken(app), ...owner, workshop: { ...workshop, zone: 'Europe/Nowhere' } };
    expect(await newBrowser().ask(postFirstOwner, { body })).toMatchObject({
      status: 400,
      body: { error: { code: 'invalid-field', field: 'workshop.zone' } },
    });
    expect(await app.db.selectFrom('person').selectAll().execute()).toEqual([]);
    expect((await newBrowser().ask(postFirstOwner, { body: { ...body, workshop } })).status).toBe(201);
  });
});
