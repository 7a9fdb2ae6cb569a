import { generateKeyPairSync, type KeyObject } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { PATCH as patchDevice } from '@/pages/api/devices/[id]';
import { GET as getDevices, POST as postDevices } from '@/pages/api/devices/index';
import { POST as postRevoke } from '@/pages/api/keys/[id]/revoke';
import { GET as getKeys, POST as postKeys } from '@/pages/api/keys/index';
import { GET as getWorkshop } from '@/pages/api/workshop/index';
import { sha256Hex } from '@/server/crypto';
import { requireDevice } from '@/server/devices';
import { openTestApp } from '../support/database';
import { addTestPeople, type Browser, newBrowser, signIn, toRequest } from '../support/requests';

const TABLET = { id: '01970000-aaaa-7000-8000-000000000001', name: 'Bay 2' };
const staff = { ines: ['technician'], bram: ['technician'], sup: ['supervisor'] } as const;

function point({ publicKey }: { publicKey: KeyObject }): string {
  const { x = '', y = '' } = publicKey.export({ format: 'jwk' });
  return Buffer.concat([Buffer.from([4]), Buffer.from(x, 'base64url'), Buffer.from(y, 'base64url')]).toString(
    'base64url',
  );
}

const newPoint = () => point(generateKeyPairSync('ec', { namedCurve: 'P-256' }));

async function enrol(browser: Browser, tablet = TABLET): Promise<Browser> {
  const { body } = await browser.ask(postDevices, { body: tablet });
  const { id, credential } = body as { id: string; credential: string };
  browser.tablet = `${id}.${credential}`;
  return browser;
}

describe('a tablet', () => {
  it('is enrolled by whoever is signed in and proves itself without them after', async () => {
    const app = await openTestApp();
    const { ines } = await addTestPeople(app, staff);
    const tablet = await enrol(await signIn(ines));
    tablet.cookies.clear();
    expect((await tablet.ask(getWorkshop)).status).toBe(200);
    expect(await requireDevice(app.db, toRequest(tablet, {}))).toMatchObject({
      ...TABLET,
      enrolledBy: ines.personId,
    });
    const { credential_hash } = await app.db
      .selectFrom('device')
      .select('credential_hash')
      .executeTakeFirstOrThrow();
    expect(credential_hash).toBe(sha256Hex(tablet.tablet?.split('.')[1] ?? ''));
  });

  it('is refused with another credential, another id or a malformed one', async () => {
    const { ines } = await addTestPeople(await openTestApp(), staff);
    const tablet = await enrol(await signIn(ines));
    const [id = '', credential = ''] = tablet.tablet?.split('.') ?? [];
    const stranger = newBrowser();
    for (const header of [
      `${id}.${'A'.repeat(43)}`,
      `01970000-aaaa-7000-8000-000000000002.${credential}`,
      'nonsense',
    ]) {
      stranger.tablet = header;
      expect(await stranger.ask(getWorkshop)).toMatchObject({
        status: 401,
        body: { error: { code: 'unknown-tablet' } },
      });
    }
  });

  it('cannot take the id of another', async () => {
    const { ines, bram } = await addTestPeople(await openTestApp(), staff);
    await enrol(await signIn(ines));
    expect(await (await signIn(bram)).ask(postDevices, { body: TABLET })).toMatchObject({
      status: 409,
      body: { error: { code: 'conflict', field: 'id' } },
    });
  });

  it('is declared lost by a supervisor, after which its credential opens nothing', async () => {
    const { ines, sup } = await addTestPeople(await openTestApp(), staff);
    const tablet = await enrol(await signIn(ines));
    const office = await signIn(sup);
    const loss = { state: 'lost', reason: 'left in a van' };
    const lose = { method: 'PATCH', params: { id: TABLET.id }, body: loss };
    expect((await tablet.ask(patchDevice, lose)).status).toBe(403);
    expect(await office.ask(patchDevice, lose)).toMatchObject({ status: 200, body: { state: 'lost' } });
    tablet.cookies.clear();
    expect((await tablet.ask(getWorkshop)).status).toBe(401);
    expect((await office.ask(getDevices)).body).toMatchObject({
      devices: [{ id: TABLET.id, state: 'lost' }],
    });
  });
});

describe('an author key', () => {
  it('is enrolled for one person on one tablet, and again without harm', async () => {
    const app = await openTestApp();
    const { ines } = await addTestPeople(app, staff);
    const tablet = await enrol(await signIn(ines));
    const publicKey = newPoint();
    const first = await tablet.ask(postKeys, { body: { publicKey } });
    const id = sha256Hex(Buffer.from(publicKey, 'base64url')).slice(0, 16);
    const { seq, body } = await app.db
      .selectFrom('workshop_entry')
      .select(['seq', 'body'])
      .where('kind', '=', 'key-enrolled')
      .executeTakeFirstOrThrow();
    expect(first).toMatchObject({ status: 201, body: { id, workshop: seq } });
    expect(JSON.parse(body)).toMatchObject({
      data: { key: id, publicKey, person: ines.personId, tablet: TABLET.id },
    });

    expect((await tablet.ask(postKeys, { body: { publicKey } })).body).toEqual(first.body);
    expect(await app.db.selectFrom('author_key').selectAll().execute()).toHaveLength(1);
  });

  it('needs both a session and the tablet', async () => {
    const { ines } = await addTestPeople(await openTestApp(), staff);
    const body = { publicKey: newPoint() };
    const browser = await signIn(ines);
    expect(await browser.ask(postKeys, { body })).toMatchObject({
      status: 401,
      body: { error: { code: 'unknown-tablet' } },
    });
    await enrol(browser);
    browser.cookies.clear();
    expect(await browser.ask(postKeys, { body })).toMatchObject({
      status: 401,
      body: { error: { code: 'not-signed-in' } },
    });
  });

  it('is not somebody else’s too', async () => {
    const { ines, bram } = await addTestPeople(await openTestApp(), staff);
    const tablet = await enrol(await signIn(ines));
    const body = { publicKey: newPoint() };
    await tablet.ask(postKeys, { body });
    await signIn(bram, tablet);
    expect((await tablet.ask(postKeys, { body })).status).toBe(409);
  });

  it('has to be a point on the curve', async () => {
    const { ines } = await addTestPeople(await openTestApp(), staff);
    const tablet = await enrol(await signIn(ines));
    const good = Buffer.from(newPoint(), 'base64url');
    const offCurve = Buffer.from(good);
    offCurve[64] = (offCurve[64] ?? 0) ^ 1;
    const bad = [good.subarray(0, 64), offCurve, Buffer.alloc(65)].map((bytes) =>
      bytes.toString('base64url'),
    );
    for (const publicKey of [...bad, `${good.toString('base64url')}=`, '']) {
      expect(await tablet.ask(postKeys, { body: { publicKey } }), publicKey).toMatchObject({
        status: 400,
        body: { error: { code: 'invalid-field', field: 'publicKey' } },
      });
    }
  });

  it('is revoked by its person or a supervisor, and others do not see it', async () => {
    const { ines, bram, sup } = await addTestPeople(await openTestApp(), staff);
    const tablet = await enrol(await signIn(ines));
    const { body } = await tablet.ask(postKeys, { body: { publicKey: newPoint() } });
    const params = { id: (body as { id: string }).id };
    const stranger = await signIn(bram);
    expect((await stranger.ask(postRevoke, { params, body: {} })).status).toBe(404);
    expect((await stranger.ask(getKeys)).body).toEqual({ keys: [] });
    const revoked = await (await signIn(sup)).ask(postRevoke, { params, body: {} });
    expect(revoked).toMatchObject({
      status: 200,
      body: { id: params.id, revokedAt: '2031-05-06T07:00:00.000Z' },
    });
  });
});
