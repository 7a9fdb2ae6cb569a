import { beforeEach, describe, expect, it, vi } from 'vitest';
import { MINUTE } from '@/server/clock';
import { addPerson, setActive } from '@/server/people';
import type { Entry } from '@/domain/entry';
import type { ScriptedEntry } from '@db/scripted-work';
import {
  enrolTestTablet,
  type OpenedJob,
  openShop,
  openTestJob,
  setClocks,
  type Shop,
  type TestTablet,
  trailOf,
  workshopOf,
} from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;

const HOLD = 'build.caps-marked';

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, lead, ann, ben } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, lead, ann, ben]);
  job = await openTestJob(tablet, supervisor);
});

const remark = (words: string) =>
  ({ kind: 'deviation-raised', data: { class: 'C', words, blocks: false } }) satisfies Partial<ScriptedEntry>;

/** Ann's work up to the hold point; the lead disposes of what needs it, so the supervisor had no hand in it. */
async function workToHold(): Promise<void> {
  const { ann, lead } = shop.people;
  await tablet.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { step: HOLD });
  setClocks(tablet);
}

const last = async () => (await tablet.sync()).at(-1);

describe('a shift on one tablet without a network', () => {
  it('A’s entries after A is gone arrive under their true authors and in order', async () => {
    const { supervisor, lead, ann, ben, owner } = shop.people;
    const { app } = shop;
    await tablet.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, {
      step: 'build.side@rod3',
    });
    const byAnn = tablet.held(job.id).outbox.length;
    expect(byAnn).toBeGreaterThan(40);
    await tablet.record(
      job.id,
      { kind: 'took-over', data: { from: ann.id, firstOfShift: true } },
      { by: ben },
    );
    await tablet.perform(job.id, { technician: ben, supervisor: lead }, shop.kit, { step: HOLD });
    await tablet.sign(job.id, HOLD, { by: supervisor });
    await tablet.record(job.id, remark('after the signature'), { by: ben });
    const made = tablet
      .held(job.id)
      .outbox.map(({ entry }) => `${entry.by} ${entry.kind} ${entry.deviceSeq}`);
    setClocks(tablet);
    app.clock.advance(MINUTE);
    await app.db.deleteFrom('session').where('userId', '=', ann.id).execute();
    await app.db.transaction().execute((trx) => setActive(trx, owner, ann.id, false, app));
    const verdicts = await tablet.sync();
    expect(verdicts.filter(({ verdict, code }) => verdict !== 'recorded' || code !== undefined)).toEqual([]);
    const rows = await trailOf(app, job.id);
    expect(rows.slice(1).map((row) => `${row.by_person} ${row.kind} ${row.device_seq}`)).toEqual(made);
    expect(new Set(rows.map(({ by_person }) => by_person))).toEqual(
      new Set([supervisor.id, ann.id, ben.id, lead.id]),
    );
  });
});

describe('a signature', () => {
  it('with the right PIN is recorded with when it was checked, and the head is signed at it', async () => {
    await workToHold();
    const { supervisor } = shop.people;
    await tablet.sign(job.id, HOLD, { by: supervisor });
    const verdict = await last();
    expect(verdict).toMatchObject({ verdict: 'recorded' });
    const row = (await trailOf(shop.app, job.id)).at(-1);
    const { keys, db } = shop.app;
    expect(JSON.parse(row!.body)).toMatchObject({ kind: 'signed', pin: { keyId: keys.sealing.current.id } });
    const heads = await db.selectFrom('signed_head').selectAll().execute();
    expect(heads).toMatchObject([{ trail: job.id, seq: row!.seq, hash: row!.hash }]);
    const told = await db
      .selectFrom('workshop_entry')
      .select('body')
      .where('kind', '=', 'head-signed')
      .execute();
    expect(told).toHaveLength(1);
  });

  it('never leaves its PIN anywhere', async () => {
    await workToHold();
    await tablet.sign(job.id, HOLD, { by: shop.people.supervisor, pin: '918273' });
    await tablet.sync();
    const tables = ['job_entry', 'refused_entry', 'workshop_entry', 'pin_attempt', 'signing_pin'] as const;
    for (const table of tables) {
      const rows = await shop.app.db.selectFrom(table).selectAll().execute();
      expect(JSON.stringify(rows)).not.toContain('918273');
      expect(JSON.stringify(rows)).not.toContain('ciphertext');
    }
  });

  it('with a wrong PIN is refused once and for all, and a new one may be made', async () => {
    await workToHold();
    const { supervisor } = shop.people;
    await tablet.sign(job.id, HOLD, { by: supervisor, pin: '111222' });
    const [wrong] = tablet.held(job.id).outbox.slice(-1);
    expect(await last()).toMatchObject({ verdict: 'refused', code: 'pin-wrong' });
    tablet.held(job.id).outbox.push(wrong!);
    expect(await last()).toMatchObject({ verdict: 'refused', code: 'pin-wrong' });
    const attempts = await shop.app.db.selectFrom('pin_attempt').selectAll().execute();
    expect(attempts).toHaveLength(1);
    await tablet.sign(job.id, HOLD, { by: supervisor });
    expect(await last()).toMatchObject({ verdict: 'recorded' });
  });

  it('that meets a lock-out waits, with all that came after it, and goes in when the lock is over', async () => {
    await workToHold();
    const { supervisor, ann } = shop.people;
    for (const pin of ['111222', '111223', '111224', '111225', '111226']) {
      await tablet.sign(job.id, HOLD, { by: supervisor, pin });
      expect(await last()).toMatchObject({ verdict: 'refused' });
    }
    await tablet.sign(job.id, HOLD, { by: supervisor });
    await tablet.record(job.id, remark('meanwhile'), { by: ann });
    const verdicts = await tablet.sync();
    expect(verdicts).toMatchObject([
      { verdict: 'waiting', code: 'pin-locked' },
      { verdict: 'waiting', code: 'earlier-missing' },
    ]);
    shop.app.clock.advance(16 * MINUTE);
    expect(await tablet.sync()).toMatchObject([{ verdict: 'recorded' }, { verdict: 'recorded' }]);
  });

  it('without a PIN, or with one sealed to another entry, is refused without an attempt', async () => {
    await workToHold();
    const { supervisor } = shop.people;
    await tablet.sign(job.id, HOLD, { by: supervisor });
    const [first] = tablet.held(job.id).outbox.splice(-1);
    const { sealed, ...bare } = first!;
    tablet.held(job.id).outbox.push(bare);
    expect(await last()).toMatchObject({ verdict: 'refused', code: 'pin-missing' });
    await tablet.sign(job.id, HOLD, { by: supervisor });
    const [second] = tablet.held(job.id).outbox.splice(-1);
    tablet.held(job.id).outbox.push({ ...second!, sealed });
    expect(await last()).toMatchObject({ verdict: 'refused', code: 'pin-unreadable' });
    expect(await shop.app.db.selectFrom('pin_attempt').selectAll().execute()).toEqual([]);
  });

  it('by somebody who has no PIN is refused and says so', async () => {
    const { owner, ann, lead } = shop.people;
    const { app } = shop;
    const id = await app.db
      .transaction()
      .execute((trx) =>
        addPerson(
          trx,
          owner,
          { name: 'Test New', email: 'new@witnessmark.example', roles: ['supervisor'] },
          app,
        ),
      );
    const person = { ...owner, id, personId: id, name: 'Test New', roles: ['supervisor'] as const };
    const other = await enrolTestTablet(shop, [ann, lead, person as unknown as typeof owner]);
    other.takeUp(job.id, job.plan);
    await other.sync();
    await other.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { step: HOLD });
    other.workshop = await workshopOf(app);
    await other.sign(job.id, HOLD, { by: { ...person, roles: ['supervisor'], pin: '280461' } });
    setClocks(other);
    expect((await other.sync()).at(-1)).toMatchObject({ verdict: 'refused', code: 'pin-none-set' });
  });

  it('waits for evidence that has not come in, and is refused if the evidence is not what was signed', async () => {
    await workToHold();
    await tablet.sync();
    const { supervisor, ben } = shop.people;
    const other = await enrolTestTablet(shop, [ben]);
    other.takeUp(job.id, job.plan);
    await other.sync();
    await tablet.sign(job.id, HOLD, {
      by: supervisor,
      change: (entry) =>
        ({
          ...entry,
          data: {
            ...entry.data,
            covers: { ...(entry as Entry & { kind: 'signed' }).data.covers, upTo: { [other.device]: 1 } },
          },
        }) as Entry,
    });
    expect(await last()).toMatchObject({ verdict: 'waiting', code: 'evidence-missing' });
    await other.record(job.id, remark('there it is'), { by: ben });
    await other.sync();
    expect(await last()).toMatchObject({ verdict: 'refused', code: 'evidence-changed' });
  });

  it('over evidence to which another tablet added meanwhile is refused, and no PIN attempt is spent', async () => {
    await workToHold();
    await tablet.sync();
    const { supervisor, ben } = shop.people;
    const other = await enrolTestTablet(shop, [ben]);
    other.takeUp(job.id, job.plan);
    await other.sync();
    await tablet.sign(job.id, HOLD, { by: supervisor });
    const step = 'build.tighten@rod1';
    const raised = { class: 'B', words: 'the head looks odd', blocks: false, rod: 1 } as const;
    await other.record(job.id, { kind: 'deviation-raised', step, data: raised }, { by: ben });
    await other.sync();
    const verdict = await last();
    expect(verdict).toMatchObject({ verdict: 'refused', code: 'evidence-changed' });
    expect(verdict?.reason).toContain('one record was added');
    expect(await shop.app.db.selectFrom('pin_attempt').selectAll().execute()).toEqual([]);
  });

  it('whose digest is not that of the evidence is refused', async () => {
    await workToHold();
    await tablet.sign(job.id, HOLD, {
      by: shop.people.supervisor,
      change: (entry) => {
        const signed = entry as Entry & { kind: 'signed' };
        return {
          ...signed,
          data: { ...signed.data, covers: { ...signed.data.covers, digest: 'd'.repeat(64) } },
        };
      },
    });
    expect(await last()).toMatchObject({ verdict: 'refused', code: 'evidence-changed' });
  });

  it('over one’s own work is refused, and over work that one helped with', async () => {
    const { ann, lead, supervisor } = shop.people;
    await tablet.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { step: 'build.turns' });
    const turned = { kind: 'turned', step: 'build.turns', data: { fullTurns: 2 } } as const;
    await tablet.record(job.id, turned, { by: ann, with: [supervisor.id] });
    await tablet.sign(job.id, HOLD, { by: supervisor, force: true });
    setClocks(tablet);
    expect(await last()).toMatchObject({ verdict: 'refused', code: 'own-work' });
    await tablet.sign(job.id, HOLD, { by: lead, force: true });
    expect(await last()).toMatchObject({ verdict: 'refused' });
  });

  it('by a technician, from photographs, or with another count than the record is refused', async () => {
    await workToHold();
    const { ann, supervisor } = shop.people;
    await tablet.sign(job.id, HOLD, { by: ann, force: true });
    expect(await last()).toMatchObject({ verdict: 'refused', code: 'role' });
    const changed = (over: object) => (entry: Entry) =>
      ({ ...entry, data: { ...entry.data, ...over } }) as Entry;
    await tablet.sign(job.id, HOLD, {
      by: supervisor,
      force: true,
      change: changed({ presence: 'from photographs' }),
    });
    expect(await last()).toMatchObject({ verdict: 'refused', code: 'presence' });
    await tablet.sign(job.id, HOLD, { by: supervisor, force: true, change: changed({ count: 7 }) });
    expect(await last()).toMatchObject({ verdict: 'refused', code: 'count-differs' });
  });

  it('that was refused does not make what was done past it in good faith forbidden', async () => {
    await workToHold();
    await tablet.sync();
    const { supervisor, ann } = shop.people;
    await tablet.sign(job.id, HOLD, { by: supervisor, pin: '111222' });
    await tablet.record(job.id, { kind: 'counted', step: 'build.rags-in', data: { count: 12 } }, { by: ann });
    const [signature, act] = (await tablet.sync()).slice(-2);
    expect(signature).toMatchObject({ verdict: 'refused', code: 'pin-wrong' });
    expect(act?.verdict).toBe('recorded');
  });
});

describe('taking over with a PIN', () => {
  const takeOver = { kind: 'took-over', data: { firstOfShift: true } } as const;

  it('is recorded with a right PIN and without one, and refused with a wrong one', async () => {
    const { ben } = shop.people;
    await tablet.record(job.id, takeOver, { by: ben, pin: ben.pin });
    await tablet.record(job.id, takeOver, { by: ben });
    await tablet.record(job.id, takeOver, { by: ben, pin: '111222' });
    await tablet.record(job.id, remark('and on'), { by: ben });
    expect(await tablet.sync()).toMatchObject([
      { verdict: 'recorded' },
      { verdict: 'recorded' },
      { verdict: 'refused', code: 'pin-wrong' },
      { verdict: 'recorded' },
    ]);
    const [, first, second] = await trailOf(shop.app, job.id);
    expect(JSON.parse(first!.body)).toHaveProperty('pin.checkedAt');
    expect(JSON.parse(second!.body)).not.toHaveProperty('pin');
  });
});
