import { createPublicKey, verify } from 'node:crypto';
import { sql } from 'kysely';
import { describe, expect, it } from 'vitest';
import { canonicalJson } from '@/domain/canonical';
import { GET as getTrail } from '@/pages/api/workshop/trail';
import { PATCH as patchPerson } from '@/pages/api/people/[id]/index';
import { sha256Hex } from '@/server/crypto';
import { signHead, WORKSHOP_TRAIL } from '@/server/signed-heads';
import { appendWorkshopEntry } from '@/server/workshop-trail';
import { openTestApp, type TestApp } from '../support/database';
import { addTestPeople, signIn } from '../support/requests';

const staff = { ines: ['technician'], sup: ['supervisor'], auditor: ['auditor'] } as const;

async function readTrail(app: TestApp) {
  const rows = await app.db.selectFrom('workshop_entry').selectAll().orderBy('seq').execute();
  return rows.map((row) => ({ ...row, entry: JSON.parse(row.body) as Record<string, unknown> }));
}

describe('the workshop’s own trail', () => {
  it('is one unbroken chain from the first person on', async () => {
    const app = await openTestApp();
    const { owner, ines } = await addTestPeople(app, staff);
    const office = await signIn(owner);
    await office.ask(patchPerson, {
      method: 'PATCH',
      params: { id: ines.personId },
      body: { roles: ['supervisor'] },
    });

    const trail = await readTrail(app);
    expect(trail.map(({ kind }) => kind)).toEqual([
      'person-added',
      'person-added',
      'person-added',
      'person-added',
      'roles-changed',
    ]);
    let prev = '0'.repeat(64);
    for (const [index, { seq, body, hash, content_hash, entry }] of trail.entries()) {
      expect(entry).toMatchObject({
        v: 1,
        seq: index + 1,
        prev,
        by: owner.personId,
        author: { name: owner.name, roles: ['owner'] },
      });
      expect(seq).toBe(index + 1);
      expect(body).toBe(canonicalJson(entry));
      expect(hash).toBe(sha256Hex(body));
      const authored = Object.fromEntries(
        Object.entries(entry).filter(([key]) => !['seq', 'recordedAt', 'prev'].includes(key)),
      );
      expect(content_hash).toBe(sha256Hex(canonicalJson(authored)));
      prev = hash;
    }
    expect(trail.at(-1)?.entry).toMatchObject({
      data: { person: ines.personId, from: ['technician'], to: ['supervisor'] },
    });
  });

  it('is not appended to when the change it tells of does not happen', async () => {
    const app = await openTestApp();
    const { owner } = await addTestPeople(app, staff);
    const append = app.db.transaction().execute(async (trx) => {
      await appendWorkshopEntry(trx, owner, { kind: 'restored', data: {} }, app);
      throw new Error('the change fails');
    });
    await expect(append).rejects.toThrow('the change fails');
    expect(await readTrail(app)).toHaveLength(4);
  });

  it('takes no numbers but whole ones and no text but NFC', async () => {
    const app = await openTestApp();
    const { owner } = await addTestPeople(app, staff);
    const append = (data: Record<string, string | number>) =>
      app.db.transaction().execute((trx) => appendWorkshopEntry(trx, owner, { kind: 'restored', data }, app));
    for (const value of [0.05, 2 ** 53, Number.NaN, 'e\u0301', '\ud800']) {
      await expect(append({ value }), String(value)).rejects.toThrow(RangeError);
    }
  });

  it('cannot be changed, cut, reordered or replaced in the database', async () => {
    const { db } = await openTestApp().then(async (app) => {
      await addTestPeople(app, staff);
      return app;
    });
    const run = (statement: string) => sql.raw(statement).execute(db);
    await expect(run(`update workshop_entry set at = '2000' where seq = 2`)).rejects.toThrow(/never changed/);
    await expect(run(`delete from workshop_entry where seq = 4`)).rejects.toThrow(/never deleted/);
    const copy = (seq: number, id: string, hash: string) =>
      run(
        `insert or replace into workshop_entry select ${seq}, ${id}, kind, by_person, at, body, content_hash, ${hash} from workshop_entry where seq = 1`,
      );
    await expect(copy(6, `'x'`, `'y'`)).rejects.toThrow(/no gaps/);
    await expect(copy(2, `'x'`, `'y'`)).rejects.toThrow(/no gaps/);
    await expect(copy(5, 'id', `'y'`), 'pushing an entry out by its id').rejects.toThrow(
      /stands in the record already/,
    );
  });

  it('is read in pages by those who may replay, and not by technicians', async () => {
    const { auditor, ines } = await addTestPeople(await openTestApp(), staff);
    const reader = await signIn(auditor);
    const first = await reader.ask(getTrail, { query: { limit: '3' } });
    expect(first).toMatchObject({
      status: 200,
      body: { entries: [{ seq: 1 }, { seq: 2 }, { seq: 3 }], next: 3 },
    });
    const second = await reader.ask(getTrail, { query: { after: '3', limit: '3' } });
    expect(second.body).toMatchObject({ entries: [{ seq: 4 }], next: null });
    expect((await reader.ask(getTrail, { query: { limit: '0' } })).body).toMatchObject({
      error: { code: 'invalid-field', field: 'limit' },
    });
    expect((await (await signIn(ines)).ask(getTrail)).status).toBe(403);
  });
});

describe('a signed head', () => {
  it('holds the newest hash under the workshop’s key, once for each entry', async () => {
    const app = await openTestApp();
    const { owner } = await addTestPeople(app, staff);
    const sign = () => app.db.transaction().execute((trx) => signHead(trx, owner, WORKSHOP_TRAIL, app));
    const head = await sign();
    app.clock.advance(1000);
    expect(await sign()).toEqual(head);
    const { signature, ...signed } = head;
    expect(signed).toMatchObject({
      trail: 'workshop',
      seq: 4,
      hash: (await readTrail(app)).at(-1)?.hash,
      key: app.keys.head.fingerprint,
    });
    const raw = Buffer.from(app.keys.head.publicKey, 'base64url');
    expect(sha256Hex(raw)).toBe(app.keys.head.fingerprint);
    const key = createPublicKey({
      key: { kty: 'OKP', crv: 'Ed25519', x: app.keys.head.publicKey },
      format: 'jwk',
    });
    expect(verify(null, Buffer.from(canonicalJson(signed)), key, Buffer.from(signature, 'base64url'))).toBe(
      true,
    );
  });

  it('cannot be changed or deleted', async () => {
    const app = await openTestApp();
    const { owner } = await addTestPeople(app, staff);
    await app.db.transaction().execute((trx) => signHead(trx, owner, WORKSHOP_TRAIL, app));
    await expect(sql.raw(`update signed_head set hash = 'x'`).execute(app.db)).rejects.toThrow(
      /never changed/,
    );
    await expect(sql.raw(`delete from signed_head`).execute(app.db)).rejects.toThrow(/never deleted/);
  });
});
