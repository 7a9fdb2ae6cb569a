import { beforeEach, describe, expect, it } from 'vitest';
import * as z from 'zod';
import { onRequest } from '@/middleware';
import type { Operation } from '@/server/http';
import { JSON_LIMIT_BYTES } from '@/server/http';
import {
  allOperations,
  call,
  handlerOf,
  isRaw,
  nameOf,
  openTable,
  type Over,
  sentFor,
  type Table,
} from '../support/api-table';

/*
 * One rule a test, tried on every operation that the description of the API names. What is spoiled comes out of
 * the description itself, so an operation that is added is tried as well.
 */

/** Cursors that no list has given. */
const CURSORS = ['cursor=', 'cursor=nonsense', 'cursor=a,b,c', 'cursor=%25,a', `cursor=${'x'.repeat(3001)}`];

let table: Table;

beforeEach(async () => {
  table = await openTable();
});

const operations = allOperations();
const withJson = operations.filter((operation) => operation.body !== undefined && !isRaw(operation));
const withBody = operations.filter((operation) => operation.body !== undefined);
const unsafe = operations.filter(({ method }) => method !== 'GET');

const refusal = z.strictObject({
  error: z.strictObject({
    code: z.string().regex(/^[a-z-]+$/),
    message: z.string().min(10),
    field: z.string().min(1).optional(),
  }),
});

/** Calls an operation and requires that it refuses in the one form that all refusals have. */
async function refused(operation: Operation, over: Over, status: number, code?: string) {
  const told = over.body instanceof Uint8Array ? { ...over, body: 'bytes' } : over;
  const what = `${nameOf(operation)} with ${JSON.stringify(told).slice(0, 300)}`;
  const answer = await call(table, operation, over);
  expect(answer.status, `${what}: ${answer.text.slice(0, 300)}`).toBe(status);
  const { error } = refusal.parse(answer.body);
  expect(error.message, what).not.toMatch(/\.ts\b|node_modules|\bat \w+ \(|SQLITE|undefined|\[object/);
  if (code !== undefined) expect(error.code, what).toBe(code);
  return error;
}

interface JsonSchema {
  type?: string;
  properties?: Record<string, JsonSchema>;
  required?: string[];
  items?: JsonSchema;
  additionalProperties?: JsonSchema | boolean;
  anyOf?: JsonSchema[];
}

const schemaOf = (operation: Operation) =>
  z.toJSONSchema(operation.body as z.ZodType, { io: 'input', unrepresentable: 'any' }) as JsonSchema;

type Path = (string | number)[];

/** Every place in a body that its schema describes and that the body fills. */
function* places(
  schema: JsonSchema,
  value: unknown,
  path: Path = [],
): Generator<{ path: Path; schema: JsonSchema; isRequired: boolean }> {
  const inner = schema.anyOf?.find(({ type }) => type !== 'null') ?? schema;
  if (Array.isArray(value) && inner.items && value.length > 0) {
    yield { path: [...path, 0], schema: inner.items, isRequired: false };
    yield* places(inner.items, value[0], [...path, 0]);
  }
  if (typeof value !== 'object' || value === null) return;
  for (const [name, one] of Object.entries(inner.properties ?? {})) {
    if (!Object.hasOwn(value, name)) continue;
    const isRequired = inner.required?.includes(name) ?? false;
    yield { path: [...path, name], schema: one, isRequired };
    yield* places(one, (value as Record<string, unknown>)[name], [...path, name]);
  }
}

/** A copy of a body with one place changed, or taken out. */
function changed(body: unknown, path: Path, change: (value: unknown) => unknown): unknown {
  const [name, ...rest] = path;
  if (name === undefined) return change(body);
  const copy = (Array.isArray(body) ? [...(body as unknown[])] : { ...(body as object) }) as Record<
    string | number,
    unknown
  >;
  const value = changed(copy[name], rest, change);
  if (value === undefined) Reflect.deleteProperty(copy, name);
  else copy[name] = value;
  return copy;
}

function typeOf(schema: JsonSchema): string | undefined {
  return schema.type ?? schema.anyOf?.find(({ type }) => type !== 'null')?.type;
}

describe('every operation of the API', { timeout: 60_000 }, () => {
  it('takes what these tests say that it takes, so that what they spoil is what is refused', async () => {
    // One-time links and sessions have tests of their own; here nobody has one.
    const unlike: Record<string, number> = {
      'POST /api/first-owner': 410,
      'POST /api/set-password': 410,
      'POST /api/auth/switch': 401,
      'POST /api/auth/sign-out': 401,
      // The job is still running.
      'POST /api/jobs/{id}/erase': 409,
    };
    // A photograph is there once it was sent.
    const isPhoto = (operation: Operation) => Number(nameOf(operation) === 'GET /api/photos/{hash}');
    for (const operation of operations.toSorted((a, b) => isPhoto(a) - isPhoto(b))) {
      const { status, text } = await call(table, operation);
      const expected = unlike[nameOf(operation)] ?? operation.status ?? 200;
      expect(status, `${nameOf(operation)}: ${text.slice(0, 300)}`).toBe(expected);
    }
    expect(Object.keys(table.sent).sort()).toEqual(operations.map(nameOf).sort());
  });

  it('refuses a field that it does not know, at every depth, and names it', async () => {
    for (const operation of withJson) {
      const { body } = sentFor(table, operation);
      const schema = schemaOf(operation);
      const objects = [{ path: [] as Path, schema }, ...places(schema, body)].filter(
        (place) => place.schema.properties !== undefined,
      );
      for (const { path } of objects) {
        const spoiled = changed(body, path, (value) => ({ ...(value as object), colour: 'red' }));
        const { field } = await refused(operation, { body: spoiled }, 400, 'invalid-field');
        expect(field, nameOf(operation)).toBe([...path, 'colour'].join('.'));
      }
    }
  });

  it('refuses a body without a field that it needs, and names it', async () => {
    for (const operation of withJson) {
      const { body } = sentFor(table, operation);
      for (const { path, isRequired } of places(schemaOf(operation), body)) {
        if (!isRequired) continue;
        const spoiled = changed(body, path, () => undefined);
        const { field } = await refused(operation, { body: spoiled }, 400, 'invalid-field');
        // What needs no value of its own may be missing as a whole, and then reads as not sent.
        expect(field, nameOf(operation)).toBe(path.join('.'));
      }
    }
  });

  it('refuses a value of another type, and names it', async () => {
    for (const operation of withJson) {
      const { body } = sentFor(table, operation);
      for (const { path, schema } of places(schemaOf(operation), body)) {
        const type = typeOf(schema);
        if (type === undefined && schema.anyOf === undefined) continue;
        for (const wrong of [7.5, true, 'text\n', { a: 1 }, [[]]]) {
          if (isOfType(type, wrong)) continue;
          const spoiled = changed(body, path, () => wrong);
          const { field } = await refused(operation, { body: spoiled }, 400, 'invalid-field');
          expect(field, `${nameOf(operation)} ${JSON.stringify(wrong)}`).toBe(path.join('.'));
        }
      }
    }
  });

  it('never fails on text that a person could not have typed', async () => {
    const awkward = ['\ud800', 'a\u0000b', '\u202egnp.exe', '__proto__', 'x'.repeat(5000), "' OR 1=1 --", ''];
    for (const operation of withJson) {
      const { body } = sentFor(table, operation);
      for (const { path, schema } of places(schemaOf(operation), body)) {
        if (typeOf(schema) !== 'string') continue;
        // A secret is hashed, which takes its time, and is never shown: one such text is enough.
        for (const text of isSecret(path) ? awkward.slice(0, 1) : awkward) {
          const answer = await call(table, operation, { body: changed(body, path, () => text) });
          const what = `${nameOf(operation)} ${path.join('.')} ${JSON.stringify(text).slice(0, 40)}`;
          expect(answer.status, `${what}: ${answer.text}`).toBeLessThan(500);
          if (answer.status >= 400) refusal.parse(answer.body);
        }
      }
    }
  });

  it('answers 415 to another content type, and to none', async () => {
    for (const operation of withBody) {
      for (const type of ['text/plain', 'multipart/form-data; boundary=x', 'application/jsonp', '']) {
        await refused(operation, { headers: { 'content-type': type } }, 415, 'wrong-content-type');
      }
    }
  });

  it('answers 413 to a body over its limit, whether its length is told or not', async () => {
    for (const operation of withBody) {
      const limit = isRaw(operation) ? 12_000_000 : (operation.maxBytes ?? JSON_LIMIT_BYTES);
      const body = Buffer.alloc(limit + 1, ' ');
      await refused(operation, { body, headers: { 'content-length': String(body.length) } }, 413);
      await refused(operation, { body }, 413, 'body-too-large');
    }
  });

  it('answers 400 to what is not JSON, and to JSON that is no object', async () => {
    for (const operation of withJson) {
      for (const body of ['', '{', '{"a":1}x', "{'a':1}", 'undefined', '\ufffe']) {
        const { field } = await refused(operation, { body }, 400, 'invalid-json');
        expect(field).toBe('body');
      }
      for (const body of ['null', '[]', '7', '"text"', '['.repeat(100_000)]) {
        const { field } = await refused(operation, { body }, 400);
        expect(field).toBe('body');
      }
      await refused(operation, { body: Buffer.from([0xff, 0xfe, 0x7b]) }, 400, 'invalid-json');
    }
  });

  it('answers 401 to nobody, before it reads what was sent', async () => {
    for (const operation of operations) {
      if (operation.who === 'anyone') continue;
      await refused(operation, { isNobody: true }, 401);
      if (operation.body !== undefined) await refused(operation, { isNobody: true, body: '{' }, 401);
    }
  });

  it('answers 401 to a tablet that is not what it says', async () => {
    const forged = `${table.tablet.device}.${'A'.repeat(43)}`;
    for (const operation of operations) {
      if (!String(operation.who).includes('tablet')) continue;
      for (const authorization of [`Tablet ${forged}`, 'Tablet ', 'Bearer x', `tablet ${forged}`]) {
        await refused(operation, { isNobody: true, headers: { authorization } }, 401);
      }
    }
  });

  it('answers 403 to those without one of its roles, and to nobody else', async () => {
    const people = Object.values(table.shop.people);
    for (const operation of operations) {
      const { who } = operation;
      if (typeof who !== 'object') continue;
      expect(who, nameOf(operation)).toContain('owner');
      for (const person of people.filter(({ roles }) => !roles.some((role) => who.includes(role)))) {
        await refused(operation, { as: person }, 403, 'not-allowed');
      }
    }
  });

  it('answers 404 where what it is about is not there, or is not seen', async () => {
    const absent = '01970000-ffff-7000-8000-00000000ffff';
    const strange = ['..', '%2e%2e', "' OR 1=1 --", 'a\u0000b', '\ud800', '__proto__', 'x'.repeat(10_000)];
    for (const operation of operations) {
      const params = Object.keys(sentFor(table, operation).params ?? {});
      for (const name of params) {
        const isHash = name === 'hash';
        if (!(isHash && operation.method === 'PUT'))
          await refused(
            operation,
            { params: { [name]: isHash ? 'f'.repeat(64) : absent } },
            404,
            'not-found',
          );
        for (const value of strange) {
          const answer = await call(table, operation, { params: { [name]: value } });
          expect([400, 404], `${nameOf(operation)} ${JSON.stringify(value)}`).toContain(answer.status);
          refusal.parse(answer.body);
        }
      }
    }
  });

  it('refuses words in its query that it does not know or that are wrong, and names them', async () => {
    for (const operation of operations.filter(({ query }) => query !== undefined)) {
      const { field } = await refused(operation, { query: '?colour=red' }, 400, 'invalid-field');
      expect(field).toBe('colour');
    }
    const wrong = {
      'GET /api/jobs': ['state=lost', `cursor=${'x'.repeat(101)}`, 'cursor=nonsense'],
      'GET /api/jobs/{id}/set-aside': CURSORS,
      'GET /api/people': CURSORS,
      'GET /api/devices': CURSORS,
      'GET /api/keys': CURSORS,
      'GET /api/tools': CURSORS,
      'GET /api/workshop/trail': ['after=-1', 'after=x', 'limit=0', 'limit=1e9', 'after=1.5', 'after=NaN'],
      'GET /api/photos/{hash}': ['size=huge'],
    };
    for (const [name, queries] of Object.entries(wrong)) {
      const operation = operations.find((one) => nameOf(one) === name);
      for (const query of queries) {
        const { field } = await refused(operation!, { query: `?${query}` }, 400, 'invalid-field');
        expect(field).toBe(query.split('=')[0]);
      }
    }
  });
});

describe('every list of the API', { timeout: 60_000 }, () => {
  const hasCursor = (operation: Operation) =>
    Object.keys((z.toJSONSchema(operation.query ?? z.object({})) as JsonSchema).properties ?? {}).includes(
      'cursor',
    );

  it('that can grow is given a page at a time', () => {
    const lists = operations.filter(hasCursor).map(nameOf).sort();
    expect(lists).toEqual([
      'GET /api/devices',
      'GET /api/jobs',
      'GET /api/jobs/{id}/set-aside',
      'GET /api/keys',
      'GET /api/mail',
      'GET /api/people',
      'GET /api/tools',
    ]);
  });
});

describe('before any operation', { timeout: 60_000 }, () => {
  /** What the middleware answers, and whether it let the operation be reached. */
  async function through(operation: Operation, headers: Record<string, string>) {
    let isReached = false;
    const { params = {} } = sentFor(table, operation);
    const path = operation.path.replace(/\{(\w+)\}/g, (_, name: string) => params[name] ?? name);
    const request = new Request(`http://localhost:4321${path}`, { method: operation.method, headers });
    const context = { request, url: new URL(request.url), locals: {}, isPrerendered: false };
    const response = await onRequest(context as never, async () => {
      isReached = true;
      return handlerOf(operation)({ request, params, locals: context.locals });
    });
    const text = (await response?.text()) ?? '';
    return { status: response?.status, text, isReached };
  }

  /** What is answered where the router has a module for the address and that has no handler for the method. */
  async function asUnrouted(method: string, path: string) {
    const request = new Request(`http://localhost:4321${path}`, { method });
    const context = { request, url: new URL(request.url), locals: {}, isPrerendered: false };
    const response = await onRequest(context as never, () =>
      Promise.resolve(new Response(null, { status: 404 })),
    );
    if (response === undefined) throw new Error('The middleware has to answer.');
    return { response, body: await response.json() };
  }

  it('a method that its address does not take is answered 405, and told which it takes', async () => {
    for (const path of new Set(operations.map((one) => one.path))) {
      const here = operations.filter((one) => one.path === path);
      const { params = {} } = sentFor(table, here[0]!);
      const address = path.replace(/\{(\w+)\}/g, (_, name: string) => params[name] ?? name);
      const takes: string[] = here.map(({ method }) => method);
      const allow = [...takes, ...(takes.includes('GET') ? ['HEAD'] : [])].sort().join(', ');
      const others = ['GET', 'POST', 'PUT', 'PATCH', 'DELETE', 'OPTIONS'].filter(
        (one) => !takes.includes(one),
      );
      for (const method of others) {
        const { response, body } = await asUnrouted(method, address);
        expect(response.status, `${method} ${address}`).toBe(405);
        expect(response.headers.get('allow'), `${method} ${address}`).toBe(allow);
        expect(refusal.parse(body).error.code).toBe('wrong-method');
      }
    }
  });

  it('an address that there is not is answered 404, whatever the method', async () => {
    for (const path of ['/api/', '/api/nothing', '/api/people/x/y/z', '/api/people//', '/api/jobs/']) {
      for (const method of ['GET', 'POST', 'DELETE']) {
        const { response, body } = await asUnrouted(method, path);
        expect(response.status, `${method} ${path}`).toBe(404);
        expect(response.headers.get('allow')).toBeNull();
        expect(refusal.parse(body).error.code).toBe('not-found');
      }
    }
  });

  it('a foreign Host is answered 421', async () => {
    for (const operation of operations) {
      const answer = await through(operation, { host: 'workshop.example' });
      expect(answer, nameOf(operation)).toMatchObject({ status: 421, isReached: false });
      expect(refusal.parse(JSON.parse(answer.text)).error.code).toBe('foreign-host');
    }
  });

  it('a foreign Origin is answered 403 wherever something could change', async () => {
    for (const operation of unsafe) {
      for (const origin of ['https://elsewhere.example', 'null', 'http://localhost.elsewhere.example:4321']) {
        const answer = await through(operation, { origin });
        expect(answer, nameOf(operation)).toMatchObject({ status: 403, isReached: false });
        expect(refusal.parse(JSON.parse(answer.text)).error.code).toBe('foreign-origin');
      }
    }
  });
});

function isSecret(path: Path): boolean {
  return ['password', 'current', 'next', 'email'].includes(String(path.at(-1)));
}

function isOfType(type: string | undefined, value: unknown): boolean {
  if (Array.isArray(value)) return type === 'array';
  if (type === 'integer' || type === 'number') return typeof value === 'number' && type === 'number';
  return typeof value === type;
}
