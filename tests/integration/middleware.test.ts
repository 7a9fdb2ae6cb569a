import type { APIContext } from 'astro';
import { describe, expect, it } from 'vitest';
import { onRequest } from '@/middleware';
import { provideApp } from '@/server/compose';
import { openTestApp } from '../support/database';
import { addTestPeople, type Ask, newBrowser, signIn, toRequest } from '../support/requests';

/** What the middleware uses of Astro's context. */
function contextFor(request: Request, isPrerendered = false): APIContext {
  const redirect = (location: string, status: number) =>
    new Response(null, { status, headers: { location } });
  return { request, url: new URL(request.url), locals: {}, isPrerendered, redirect } as unknown as APIContext;
}

const page = () => Promise.resolve(new Response('<p>page</p>', { headers: { 'content-type': 'text/html' } }));

async function ask(path: string, options: Ask = {}, browser = newBrowser(), next = page) {
  const context = contextFor(toRequest(browser, options, path));
  const response = await onRequest(context, next);
  if (response === undefined) throw new Error('The middleware has to answer.');
  return { context, response };
}

const post = (headers: Record<string, string>) => ({ method: 'POST', body: {}, headers });

describe('every request', () => {
  it('with a foreign Host is answered 421 as JSON', async () => {
    await openTestApp();
    for (const host of ['evil.example', 'localhost.evil.example:4321', 'workshop.example']) {
      const { response } = await ask('/api/workshop', { headers: { host } });
      expect(response.status, host).toBe(421);
      expect(await response.json()).toMatchObject({ error: { code: 'foreign-host' } });
    }
  });

  it('with one of this machine’s names or the public one is let through', async () => {
    await openTestApp({ publicUrl: 'https://workshop.example' });
    for (const host of ['workshop.example', 'localhost:4321', '127.0.0.1:4321', '[::1]:4321']) {
      expect((await ask('/sign-in', { headers: { host } })).response.status, host).toBe(200);
    }
  });

  it('that changes something from a foreign origin is answered 403', async () => {
    await openTestApp();
    const foreign = [
      { origin: 'https://evil.example' },
      { origin: 'null' },
      { origin: 'http://localhost:9999' },
      { origin: 'https://localhost:4321' },
      { 'sec-fetch-site': 'cross-site' },
      { 'sec-fetch-site': 'same-site', origin: 'http://localhost:4321' },
    ];
    for (const headers of foreign) {
      const { response } = await ask('/api/people', post(headers));
      expect(response.status, JSON.stringify(headers)).toBe(403);
      expect(await response.json()).toMatchObject({ error: { code: 'foreign-origin' } });
    }
    for (const method of ['PUT', 'PATCH', 'DELETE']) {
      const { response } = await ask('/api/people', { ...post({ origin: 'https://evil.example' }), method });
      expect(response.status, method).toBe(403);
    }
  });

  it('that changes something from the site’s own pages, or from no browser, is let through', async () => {
    await openTestApp();
    const own = [
      {},
      { origin: 'http://localhost:4321', 'sec-fetch-site': 'same-origin' },
      { origin: 'http://127.0.0.1:4321', 'sec-fetch-site': 'same-origin' },
    ];
    for (const headers of own) {
      const { response } = await ask('/api/people', post(headers));
      expect(response.status, JSON.stringify(headers)).toBe(200);
    }
  });

  it('only reads from elsewhere without harm', async () => {
    await openTestApp();
    const { response } = await ask('/sign-in', { headers: { 'sec-fetch-site': 'cross-site' } });
    expect(response.status).toBe(200);
  });
});

describe('a page', () => {
  it('sends people who are not signed in to where they do, and remembers the way back', async () => {
    await openTestApp();
    const { response } = await ask('/jobs/7?phase=2');
    expect(response.status).toBe(303);
    expect(response.headers.get('location')).toBe('/sign-in?next=%2Fjobs%2F7%3Fphase%3D2');
  });

  it('knows who is signed in', async () => {
    const { ines } = await addTestPeople(await openTestApp(), { ines: ['technician'] });
    const { context, response } = await ask('/jobs', {}, await signIn(ines));
    expect(response.status).toBe(200);
    expect(context.locals.actor).toMatchObject({ personId: ines.personId, roles: ['technician'] });
  });

  it('that is made at build time needs no data folder', async () => {
    provideApp(undefined);
    const response = await onRequest(contextFor(new Request('http://localhost/floor'), true), page);
    expect(response?.status).toBe(200);
  });
});

describe('an address under /api that nothing answers', () => {
  it('is 404 as JSON', async () => {
    await openTestApp();
    const notThere = () =>
      Promise.resolve(
        new Response('<h1>404</h1>', { status: 404, headers: { 'content-type': 'text/html' } }),
      );
    const { response } = await ask('/api/nothing', {}, newBrowser(), notThere);
    expect(response.status).toBe(404);
    expect(await response.json()).toMatchObject({ error: { code: 'not-found' } });
  });
});
