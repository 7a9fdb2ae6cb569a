import { once } from 'node:events';
import { mkdir, mkdtemp, rm, writeFile } from 'node:fs/promises';
import { request, type Server } from 'node:http';
import { connect } from 'node:net';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { createHttpServer, type PageHandler } from '@/commands/http/http-server';
import { readStaticFiles } from '@/commands/http/static-files';
import { readSettings } from '@/server/settings';

const MEGABYTE = 1_048_576;

let folder: string;
let server: Server;
let port: number;
let handler: PageHandler;

beforeEach(async () => {
  folder = await mkdtemp(path.join(tmpdir(), 'witnessmark-client-'));
  await mkdir(path.join(folder, 'floor'));
  await mkdir(path.join(folder, '_astro'));
  await writeFile(path.join(folder, 'floor', 'index.html'), '<h1>Floor</h1>');
  await writeFile(path.join(folder, '404.html'), '<h1>Not here</h1>');
  await writeFile(path.join(folder, 'sw.js'), 'self');
  await writeFile(path.join(folder, '_astro', 'a.123.js'), 'x'.repeat(5000));
  // What the handler was given, as the pages would see it.
  handler = async (incoming, response) => {
    let size = 0;
    for await (const chunk of (incoming as unknown as { body: AsyncIterable<Uint8Array> }).body)
      size += chunk.byteLength;
    response.writeHead(200, { 'content-type': 'application/json' });
    response.end(JSON.stringify({ size, headers: incoming.headers }));
  };
  await start({});
});

afterEach(async () => {
  server.closeAllConnections();
  server.close();
  await rm(folder, { recursive: true, force: true });
});

async function start(env: Record<string, string>): Promise<void> {
  const settings = readSettings(env, folder);
  server = createHttpServer({
    settings,
    files: await readStaticFiles(folder),
    handler: (...args) => handler(...args),
  });
  server.listen(0, '127.0.0.1');
  await once(server, 'listening');
  const address = server.address();
  port = typeof address === 'object' && address !== null ? address.port : 0;
  settings.port = port;
}

/** A handler that knows no page. */
const passOn: PageHandler = (_incoming, _response, next) => {
  next();
  return Promise.resolve();
};

interface Answer {
  status: number;
  headers: Record<string, string | string[] | undefined>;
  text: string;
}

interface Ask {
  method?: string;
  headers?: Record<string, string>;
  body?: Uint8Array | Uint8Array[];
}

/** A raw request, because fetch sets Host by itself and never sends a body in chunks of our choice. */
async function ask(url: string, { method = 'GET', headers = {}, body }: Ask = {}): Promise<Answer> {
  return new Promise((resolve, reject) => {
    const outgoing = request({
      host: '127.0.0.1',
      port,
      path: url,
      method,
      headers: { host: `localhost:${port}`, ...headers },
    });
    outgoing.on('response', (incoming) => {
      const parts: Uint8Array[] = [];
      incoming.on('data', (part: Uint8Array) => parts.push(part));
      incoming.on('end', () => {
        resolve({
          status: incoming.statusCode ?? 0,
          headers: incoming.headers,
          text: Buffer.concat(parts).toString(),
        });
      });
    });
    outgoing.on('error', reject);
    for (const part of [body ?? []].flat()) outgoing.write(part);
    outgoing.end();
  });
}

describe('the built files', () => {
  it('answers the Floor with and without the slash at its end, to be asked for again each time', async () => {
    for (const url of ['/floor', '/floor/', '/floor?job=7']) {
      const answer = await ask(url);
      expect(answer).toMatchObject({ status: 200, text: '<h1>Floor</h1>' });
      expect(answer.headers['cache-control']).toBe('no-cache');
      expect(answer.headers['content-type']).toBe('text/html; charset=utf-8');
    }
  });

  it('lets files whose name holds their hash be kept for ever, and the service worker never', async () => {
    expect((await ask('/_astro/a.123.js')).headers['cache-control']).toBe(
      'public, max-age=31536000, immutable',
    );
    expect((await ask('/sw.js')).headers['cache-control']).toBe('no-cache');
  });

  it('answers 304 to whoever has the file already', async () => {
    const { headers } = await ask('/sw.js');
    expect((await ask('/sw.js', { headers: { 'if-none-match': String(headers.etag) } })).status).toBe(304);
    expect((await ask('/sw.js', { headers: { 'if-none-match': '"other"' } })).status).toBe(200);
  });

  it('packs what is worth packing, for those who can unpack it', async () => {
    const packed = await ask('/_astro/a.123.js', { headers: { 'accept-encoding': 'br, gzip' } });
    expect(packed.headers['content-encoding']).toBe('gzip');
    expect(Number(packed.headers['content-length'])).toBeLessThan(200);
    expect((await ask('/_astro/a.123.js')).text).toBe('x'.repeat(5000));
  });

  it('answers HEAD without a body', async () => {
    expect(await ask('/floor', { method: 'HEAD' })).toMatchObject({ status: 200, text: '' });
  });

  it.each(['/../package.json', '/..%2fpackage.json', '/%2e%2e/package.json', '/floor/../../x'])(
    'never leaves the folder for %s',
    async (url) => {
      handler = passOn;
      expect((await ask(url)).status).toBe(404);
    },
  );
});

describe('what the pages do not know', () => {
  beforeEach(() => {
    handler = passOn;
  });

  it('is answered with the prerendered page for it', async () => {
    expect(await ask('/nothing')).toMatchObject({ status: 404, text: '<h1>Not here</h1>' });
  });

  it('is answered with JSON under /api', async () => {
    const answer = await ask('/api/nothing');
    expect(answer.status).toBe(404);
    expect(JSON.parse(answer.text)).toMatchObject({ error: { code: 'not-found' } });
  });

  it('is answered 400 when the address cannot be read', async () => {
    expect(JSON.parse((await ask('/%E0%A4%A')).text)).toMatchObject({ error: { code: 'malformed-address' } });
  });
});

describe('the Host header', () => {
  it.each(['other.example', 'other.example:4321', 'localhost'])(
    'is refused with 421 when it is %s',
    async (host) => {
      const answer = await ask('/api/me', { headers: { host } });
      expect(answer.status).toBe(421);
      expect(JSON.parse(answer.text)).toMatchObject({ error: { code: 'foreign-host' } });
    },
  );

  it('is judged for built files too', async () => {
    expect((await ask('/floor', { headers: { host: 'other.example' } })).status).toBe(421);
  });
});

describe('a method that no address takes', () => {
  it('is answered 405 as JSON, and nothing behind is asked', async () => {
    for (const method of ['TRACE', 'PROPFIND', 'PURGE']) {
      for (const url of ['/api/me', '/floor', '/sw.js']) {
        const { status, headers, text } = await ask(url, { method });
        expect(status, `${method} ${url}`).toBe(405);
        expect(headers.allow).toBe('GET, HEAD, POST, PUT, PATCH, DELETE, OPTIONS');
        expect(JSON.parse(text)).toMatchObject({ error: { code: 'wrong-method' } });
      }
    }
  });
});

describe('forwarded headers', () => {
  const claims = {
    forwarded: 'for=192.0.2.1',
    'x-forwarded-for': '192.0.2.1',
    'x-forwarded-host': 'other.example',
    'x-forwarded-proto': 'https',
    'x-forwarded-port': '99',
    'x-real-ip': '192.0.2.1',
    'x-client-address': '192.0.2.1',
  };

  async function seen(): Promise<Record<string, string>> {
    const { text } = await ask('/api/me', { headers: claims });
    return (JSON.parse(text) as { headers: Record<string, string> }).headers;
  }

  it('are replaced by what is known when no proxy is trusted', async () => {
    const headers = await seen();
    expect(headers['x-client-address']).toBe('127.0.0.1');
    expect(headers['x-forwarded-for']).toBe('127.0.0.1');
    expect(headers['x-forwarded-proto']).toBe('http');
    expect(
      Object.keys(headers).filter((name) => /forwarded-(host|port)|^forwarded$|real-ip/.test(name)),
    ).toEqual([]);
  });

  it('name the client when a trusted proxy sent them', async () => {
    server.close();
    await start({ TRUST_PROXY: 'loopback' });
    expect((await seen())['x-client-address']).toBe('192.0.2.1');
  });
});

describe('bodies', () => {
  const post = (url: string, body: Uint8Array | Uint8Array[], headers: Record<string, string> = {}) =>
    ask(url, { method: 'POST', body, headers });

  it('reach the pages whole up to the limit', async () => {
    const answer = await post('/api/sync', Buffer.alloc(MEGABYTE));
    expect(JSON.parse(answer.text)).toMatchObject({ size: MEGABYTE });
  });

  it('are refused with 413 by their announced length', async () => {
    const answer = await post('/api/sync', Buffer.alloc(MEGABYTE + 1), {
      'content-length': String(MEGABYTE + 1),
    });
    expect(answer.status).toBe(413);
    expect(JSON.parse(answer.text)).toMatchObject({ error: { code: 'body-too-large' } });
  });

  it('are refused with 413 when they come in chunks without a length', async () => {
    const chunks = Array.from({ length: 20 }, () => Buffer.alloc(100_000));
    expect((await post('/api/sync', chunks, { 'transfer-encoding': 'chunked' })).status).toBe(413);
  });

  it('never reach the pages when they are too large', async () => {
    const called = vi.fn<PageHandler>();
    handler = called;
    await post('/api/sync', [Buffer.alloc(MEGABYTE), Buffer.alloc(1)], { 'transfer-encoding': 'chunked' });
    expect(called).not.toHaveBeenCalled();
  });

  it('may be 12 MB for a photograph', async () => {
    expect(JSON.parse((await post('/api/photos', Buffer.alloc(12 * MEGABYTE))).text)).toMatchObject({
      size: 12 * MEGABYTE,
    });
    const tooLarge = await post('/api/photos', [Buffer.alloc(12 * MEGABYTE), Buffer.alloc(1)], {
      'transfer-encoding': 'chunked',
    });
    expect(tooLarge.status).toBe(413);
  });

  it('that break off are forgotten without an error, and the next request is answered', async () => {
    const socket = connect(port, '127.0.0.1');
    socket.write(`POST /api/sync HTTP/1.1\r\nHost: localhost:${port}\r\nContent-Length: 1000\r\n\r\nhalf`);
    await once(socket, 'connect');
    socket.destroy();
    expect((await ask('/floor')).status).toBe(200);
  });
});

describe('every answer', () => {
  it('carries the security headers, whoever made it', async () => {
    for (const url of ['/floor', '/api/me']) {
      const { headers } = await ask(url);
      expect(headers).toMatchObject({
        'x-content-type-options': 'nosniff',
        'x-frame-options': 'DENY',
        'referrer-policy': 'same-origin',
      });
      expect(headers['content-security-policy']).toContain("frame-ancestors 'none'");
    }
  });

  it('keeps the content policy of a page and adds what a page cannot say', async () => {
    handler = (_incoming, response) => {
      response.writeHead(200, { 'content-security-policy': "default-src 'self';" });
      response.end();
      return Promise.resolve();
    };
    expect((await ask('/jobs')).headers['content-security-policy']).toBe(
      "default-src 'self'; frame-ancestors 'none'",
    );
  });

  it('is kept by nobody unless the page says so', async () => {
    expect((await ask('/api/me')).headers['cache-control']).toBe('private, no-store');
  });

  it('asks for HTTPS from then on when the public address is one', async () => {
    expect((await ask('/floor')).headers['strict-transport-security']).toBeUndefined();
    server.close();
    await start({ PUBLIC_URL: 'https://workshop.example' });
    expect((await ask('/floor')).headers['strict-transport-security']).toBe('max-age=31536000');
  });
});

it('answers 500 in JSON, and logs why, when a page throws', async () => {
  vi.mocked(console.error).mockImplementation(() => undefined);
  handler = () => Promise.reject(new Error('a fault'));
  const answer = await ask('/api/me');
  expect(answer.status).toBe(500);
  expect(answer.text).not.toContain('a fault');
  expect(console.error).toHaveBeenCalledOnce();
});
