import { describe, expect, it } from 'vitest';
import * as z from 'zod';
import { POST as postPeople } from '@/pages/api/people/index';
import { endpoint, JSON_LIMIT_BYTES } from '@/server/http';
import { openTestApp } from '../support/database';
import { addTestPeople, newBrowser, signIn, toRequest } from '../support/requests';

const person = { name: 'Wren Abara', email: 'wren@witnessmark.example', roles: ['technician'] };

const echo = endpoint(
  {
    method: 'POST',
    path: '/api/test',
    summary: 'Answers what it was sent',
    who: 'anyone',
    body: z.strictObject({ list: z.array(z.strictObject({ name: z.string() })) }),
    answer: z.unknown(),
  },
  async ({ body }) => body,
);

const broken = endpoint(
  { method: 'GET', path: '/api/test-broken', summary: 'Fails', who: 'anyone', answer: z.unknown() },
  async () => {
    throw new Error('the secret cause');
  },
);

async function ownerBrowser() {
  const { owner } = await addTestPeople(await openTestApp(), {});
  return signIn(owner);
}

describe('an API route', () => {
  it('answers 401 to nobody and 403 to somebody without the role', async () => {
    const { ines } = await addTestPeople(await openTestApp(), { ines: ['technician'] });
    expect(await newBrowser().ask(postPeople, { body: person })).toMatchObject({
      status: 401,
      body: { error: { code: 'not-signed-in' } },
    });
    expect(await (await signIn(ines)).ask(postPeople, { body: person })).toMatchObject({
      status: 403,
      body: { error: { code: 'not-allowed' } },
    });
  });

  it('names the field that is wrong, missing or unknown', async () => {
    await openTestApp();
    const fieldOf = async (body: unknown) => {
      const answer = await newBrowser().ask(echo, { body });
      expect(answer, JSON.stringify(body)).toMatchObject({
        status: 400,
        body: { error: { code: 'invalid-field' } },
      });
      return (answer.body as { error: { field: string } }).error.field;
    };
    expect(await fieldOf({ list: [{ name: 'a' }, { name: 7 }] })).toBe('list.1.name');
    expect(await fieldOf({})).toBe('list');
    expect(await fieldOf({ list: [], extra: 1 })).toBe('extra');
    expect(await fieldOf({ list: [{ name: 'a', extra: 1 }] })).toBe('list.0.extra');
    expect(await fieldOf([])).toBe('body');
  });

  it('answers 415 to another content type', async () => {
    const browser = await ownerBrowser();
    for (const type of [
      'text/plain',
      'application/x-www-form-urlencoded',
      'multipart/form-data; boundary=x',
    ]) {
      const answer = await browser.ask(postPeople, { body: person, headers: { 'content-type': type } });
      expect(answer, type).toMatchObject({ status: 415, body: { error: { code: 'wrong-content-type' } } });
    }
    const withCharset = { body: person, headers: { 'content-type': 'application/json; charset=utf-8' } };
    expect((await browser.ask(postPeople, withCharset)).status).toBe(201);
  });

  it('answers 400 to a body that is not JSON', async () => {
    const browser = await ownerBrowser();
    for (const body of ['{"name":', '', 'name=Wren']) {
      expect(await browser.ask(postPeople, { body }), body).toMatchObject({
        status: 400,
        body: { error: { code: 'invalid-json', field: 'body' } },
      });
    }
  });

  it('answers 413 to a body over the limit, whether its length is told or not', async () => {
    await openTestApp();
    const text = JSON.stringify({ list: [{ name: 'x'.repeat(JSON_LIMIT_BYTES) }] });
    const told = await newBrowser().ask(echo, { body: text });
    const chunked = new Request('http://localhost:4321/api/test', {
      method: 'POST',
      headers: { 'content-type': 'application/json' },
      body: new Blob([text]).stream(),
      duplex: 'half',
    } as RequestInit);
    expect(told).toMatchObject({ status: 413, body: { error: { code: 'body-too-large' } } });
    expect((await echo({ request: chunked })).status).toBe(413);
  });

  it('never shows why it failed, and logs it under a number that it tells', async () => {
    const app = await openTestApp();
    const logged: unknown[] = [];
    app.log.error = (entry: unknown) => logged.push(entry);
    const { status, body } = await newBrowser().ask(broken);
    expect(status).toBe(500);
    expect(JSON.stringify(body)).not.toMatch(/secret|at .*\.ts/);
    const { incident } = logged[0] as { incident: string };
    expect(body).toMatchObject({
      error: { code: 'unexpected', message: expect.stringContaining(incident) as string },
    });
  });

  it('is kept by no cache', async () => {
    await openTestApp();
    const response = await echo({ request: toRequest(newBrowser(), { body: { list: [] } }) });
    expect(response.headers.get('cache-control')).toBe('no-store');
  });
});
