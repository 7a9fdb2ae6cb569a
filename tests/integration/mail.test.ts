import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { GET as getMail } from '@/pages/api/mail/index';
import { GET as getWitness, POST as postWitness, PUT as putWitness } from '@/pages/api/workshop/witness';
import { signDailyHeads } from '@/server/daily-heads';
import { type LocalMail, startLocalMail } from '@/server/local-mail';
import { serviceMailer } from '@/server/mail';
import { sendDueMail } from '@/server/mail-queue';
import { DAY, MINUTE } from '@/server/clock';
import { ask, enrolTestTablet, openShop, openTestJob, type Shop } from '../support/tablet';

vi.setConfig({ testTimeout: 60_000 });

const letter = {
  id: '01970000-0000-7000-8000-0000000000aa',
  to: 'witness@witness.example',
  subject: 'A head',
  text: 'Keep this letter.',
};

describe('a mailer over the service', () => {
  let local: LocalMail;
  beforeEach(async () => {
    local = await startLocalMail();
  });
  afterEach(() => local.stop());

  it('hands a letter over whole', async () => {
    expect(await serviceMailer(local, 'here').send(letter)).toEqual({ ok: true });
    const { to, subject, text } = letter;
    expect(local.letters).toMatchObject([{ to, subject, text, from: local.from }]);
  });

  it('sends one letter once, however often it is asked to', async () => {
    const mailer = serviceMailer(local, 'here');
    await mailer.send(letter);
    await mailer.send(letter);
    await mailer.send({ ...letter, id: '01970000-0000-7000-8000-0000000000ab' });
    expect(local.letters).toHaveLength(2);
  });

  it('says of an address that is none that trying again is of no use', async () => {
    const sent = await serviceMailer(local, 'here').send({ ...letter, to: 'nobody' });
    expect(sent).toMatchObject({ ok: false, isFinal: true, words: expect.stringContaining('to') });
    expect(local.letters).toEqual([]);
  });

  it.each([
    ['a wrong key', { status: 401, name: 'invalid_api_key', message: 'API key is invalid' }],
    ['too many letters', { status: 429, name: 'rate_limit_exceeded', message: 'Too many requests' }],
    ['a broken service', { status: 500, name: 'internal_server_error', message: 'Something broke' }],
  ])('can try again after %s', async (_, failure) => {
    local.failNext(failure);
    const mailer = serviceMailer(local, 'here');
    expect(await mailer.send(letter)).toEqual({ ok: false, isFinal: false, words: failure.message });
    expect(await mailer.send(letter)).toEqual({ ok: true });
  });

  it('gives no error of its own where the service can not be reached', async () => {
    const gone = { ...local, baseUrl: 'http://127.0.0.1:9' };
    expect(await serviceMailer(gone, 'service').send(letter)).toMatchObject({ ok: false, isFinal: false });
  });

  it('is refused by the fake with another key, as by the service', async () => {
    const sent = await serviceMailer({ ...local, apiKey: 're_other' }, 'here').send(letter);
    expect(sent).toMatchObject({ ok: false, isFinal: false });
    expect(local.letters).toEqual([]);
  });
});

describe('signed heads', () => {
  let shop: Shop;
  let local: LocalMail;
  beforeEach(async () => {
    shop = await openShop();
    local = await startLocalMail();
  });
  afterEach(() => local.stop());

  const choose = (address: string | null) =>
    ask(putWitness, { as: shop.people.owner, body: { address }, method: 'PUT' });
  const send = () => sendDueMail(shop.app, serviceMailer(local, 'here'));
  const queued = async () => {
    const answer = await ask(getMail, { as: shop.people.owner });
    return (answer.body as { mail: { purpose: string; address: string; state: string; body: string }[] })
      .mail;
  };

  async function finishJob() {
    const { supervisor, lead, ann } = shop.people;
    const tablet = await enrolTestTablet(shop, [supervisor, lead, ann]);
    const job = await openTestJob(tablet, supervisor);
    await tablet.perform(job.id, { technician: ann, supervisor }, shop.kit, { entries: 500, signs: true });
    await tablet.sync();
    return job;
  }

  it('leave the house at each class A hold point and at handover, to the witness and to the customer', async () => {
    await choose('witness@witness.example');
    const job = await finishJob();
    const heads = await shop.app.db
      .selectFrom('signed_head')
      .selectAll()
      .where('trail', '=', job.id)
      .execute();
    expect(heads.length).toBeGreaterThan(1);
    await send();
    const toWitness = local.letters.filter(({ to }) => to === 'witness@witness.example');
    const toCustomer = local.letters.filter(({ to }) => to === 'ada@customer.example');
    for (const { hash, signature } of heads) {
      expect(toWitness.filter(({ text }) => text.includes(hash) && text.includes(signature))).toHaveLength(1);
    }
    expect(toCustomer).toHaveLength(1);
    expect(toCustomer[0]?.text).toContain(heads.at(-1)?.hash);
    expect(toCustomer[0]?.text).not.toMatch(/TW71|Testperson/);
  });

  it('stay in the house while the owner has chosen no address, but for the customer’s', async () => {
    await finishJob();
    expect((await queued()).map(({ purpose }) => purpose)).toEqual(['handover to customer']);
  });

  it('of a day come in one letter, once', async () => {
    await choose('witness@witness.example');
    const { supervisor, ann } = shop.people;
    const tablet = await enrolTestTablet(shop, [supervisor, ann]);
    const job = await openTestJob(tablet, supervisor);
    await signDailyHeads(shop.app);
    await signDailyHeads(shop.app);
    const [mail, ...more] = await queued();
    expect(more).toEqual([]);
    expect(mail?.body).toContain(job.id);
    expect(mail?.body).toContain('witnessmark-head 1 workshop ');
    shop.app.clock.advance(DAY);
    await signDailyHeads(shop.app);
    const texts = (await queued()).map(({ body }) => body);
    expect(texts.filter((text) => text.includes(job.id))).toHaveLength(1);
  });

  it('are tried again until they leave, ever more rarely, and are never sent twice', async () => {
    await choose('witness@witness.example');
    await ask(postWitness, { as: shop.people.owner, body: {} });
    local.failNext(
      { status: 500, name: 'internal_server_error', message: 'Something broke' },
      { status: 500, name: 'internal_server_error', message: 'Something broke' },
    );
    expect([await send(), await send()]).toEqual([0, 0]);
    shop.app.clock.advance(MINUTE);
    expect(await send()).toBe(0);
    shop.app.clock.advance(MINUTE);
    expect(await send()).toBe(0);
    shop.app.clock.advance(MINUTE);
    expect([await send(), await send()]).toEqual([1, 0]);
    expect(local.letters).toHaveLength(1);
    expect(await queued()).toMatchObject([{ state: 'sent', via: 'here', trouble: null }]);
  });

  it('that no service will ever take are given up and shown with the reason', async () => {
    await choose('witness@witness.example');
    await ask(postWitness, { as: shop.people.owner, body: {} });
    local.failNext({ status: 422, name: 'validation_error', message: 'Invalid `to` field.' });
    await send();
    expect(await queued()).toMatchObject([{ state: 'failed', trouble: 'Invalid `to` field.' }]);
  });

  it('are the owner’s to send elsewhere, and the trail says that it changed without saying to whom', async () => {
    const { supervisor, owner } = shop.people;
    const asSupervisor = await ask(putWitness, {
      as: supervisor,
      body: { address: 'x@witness.example' },
      method: 'PUT',
    });
    expect(asSupervisor.status).toBe(403);
    expect((await ask(getMail, { as: supervisor })).status).toBe(403);
    expect((await ask(postWitness, { as: owner, body: {} })).status).toBe(403);
    await choose('witness@witness.example');
    expect((await ask(getWitness, { as: owner })).body).toEqual({ address: 'witness@witness.example' });
    await choose(null);
    const rows = await shop.app.db
      .selectFrom('workshop_entry')
      .select('body')
      .where('kind', '=', 'witness-address-changed')
      .execute();
    expect(rows.map(({ body }) => body).join()).toMatch(/"address":"set".*"address":"removed"/);
    expect(rows.map(({ body }) => body).join()).not.toContain('@witness.example');
  });
});
