import { describe, expect, it } from 'vitest';
import { GET } from '@/pages/api/openapi.json';
import type { Operation } from '@/server/http';
import { allOperations, call, nameOf, openTable } from '../support/api-table';
import { openTestApp } from '../support/database';
import { newBrowser } from '../support/requests';
import { setClocks } from '../support/tablet';

interface Document {
  openapi: string;
  paths: Record<string, Record<string, Record<string, unknown>>>;
}

async function readDocument(): Promise<Document> {
  await openTestApp();
  const { status, body } = await newBrowser().ask(GET);
  expect(status).toBe(200);
  return body as Document;
}

describe('the description of the API', () => {
  it('is OpenAPI 3.1 and holds every route that exports a method', async () => {
    const { openapi, paths } = await readDocument();
    expect(openapi).toBe('3.1.0');
    const modules = import.meta.glob<Record<string, unknown>>('/src/pages/api/**/*.ts', { eager: true });
    const routes = Object.entries(modules).flatMap(([file, module]) => {
      const path = file
        .replace('/src/pages', '')
        .replace(/(\/index)?\.ts$/, '')
        .replace(/\[(?:\.\.\.)?(\w+)\]/g, '{$1}');
      return Object.keys(module)
        .filter((name) => /^(GET|POST|PUT|PATCH|DELETE)$/.test(name))
        .map((method) => `${method} ${path}`);
    });
    const described = Object.entries(paths).flatMap(([path, methods]) =>
      Object.keys(methods).map((method) => `${method.toUpperCase()} ${path}`),
    );
    expect(described.sort()).toEqual(routes.sort());
  });

  it('says what a body may hold, and that nothing else may be in it', async () => {
    const { paths } = await readDocument();
    expect(paths['/api/people']?.post).toMatchObject({
      requestBody: {
        content: {
          'application/json': {
            schema: {
              type: 'object',
              required: ['name', 'email', 'roles'],
              additionalProperties: false,
              properties: { name: { type: 'string', maxLength: 120 } },
            },
          },
        },
      },
      security: [{ session: [] }],
    });
    expect(paths['/api/people/{id}']?.get).toMatchObject({
      parameters: [{ name: 'id', in: 'path', required: true }],
    });
    expect(paths['/api/workshop/trail']?.get).toMatchObject({
      parameters: [{ name: 'after', in: 'query', required: false }, { name: 'limit' }],
    });
  });
});

describe('the form of the description', () => {
  it('is that of OpenAPI 3.1: nothing is missing, nothing points to nowhere', async () => {
    const document = await readDocument();
    expect(document).toMatchObject({
      openapi: expect.stringMatching(/^3\.1\.\d+$/) as string,
      info: { title: expect.any(String) as string, version: expect.any(String) as string },
    });
    for (const [path, item] of Object.entries(document.paths)) {
      expect(path).toMatch(/^\/[\w/.{}-]+$/);
      const named = [...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => name);
      for (const [method, operation] of Object.entries(item)) {
        const where = `${method} ${path}`;
        checkOperation(operation as unknown as OperationObject, { where, method, named, document });
      }
    }
  });

  it('has only schemas of JSON Schema 2020-12, each of whose references leads somewhere', async () => {
    const document = await readDocument();
    const schemas = [...schemasIn(document)];
    expect(schemas.length).toBeGreaterThan(100);
    for (const { schema, at } of schemas) checkSchema(schema, at, document);
  });
});

interface OperationObject {
  summary?: string;
  parameters?: { name: string; in: string; required: boolean; schema: object }[];
  requestBody?: { required: boolean; content: Record<string, { schema: object }> };
  responses: Record<string, { description: string; content: Record<string, { schema: object }> }>;
  security: Record<string, string[]>[];
}

function checkOperation(
  operation: OperationObject,
  {
    where,
    method,
    named,
    document,
  }: { where: string; method: string; named: (string | undefined)[]; document: Document },
): void {
  expect(['get', 'post', 'put', 'patch', 'delete'], where).toContain(method);
  expect(operation.summary, where).toMatch(/^[A-Z].{8,}/);
  const parameters = operation.parameters ?? [];
  expect(
    parameters.filter((one) => one.in === 'path').map(({ name }) => name),
    where,
  ).toEqual(named);
  expect(
    parameters.every((one) => one.in !== 'path' || one.required),
    where,
  ).toBe(true);
  const keys = parameters.map((one) => `${one.in} ${one.name}`);
  expect(new Set(keys).size, where).toBe(keys.length);
  if (method === 'get') expect(operation.requestBody, where).toBeUndefined();
  for (const content of [operation.requestBody?.content ?? {}]) {
    for (const type of Object.keys(content)) expect(type, where).toMatch(/^[a-z]+\/[a-z+.-]+$/);
  }
  const statuses = Object.keys(operation.responses);
  expect(statuses.filter((status) => /^2\d\d$/.test(status)).length, where).toBeGreaterThan(0);
  expect(statuses, where).toContain('default');
  for (const response of Object.values(operation.responses)) expect(response.description, where).not.toBe('');
  const schemes = Object.keys(
    (document as unknown as { components: { securitySchemes: object } }).components.securitySchemes,
  );
  for (const scheme of operation.security.flatMap((one) => Object.keys(one))) {
    expect(schemes, where).toContain(scheme);
  }
}

interface Found {
  schema: Record<string, unknown>;
  at: string;
}

/** Every schema of the description, those within others included. */
function* schemasIn(node: unknown, at = '#', isSchema = false): Generator<Found> {
  if (typeof node !== 'object' || node === null) return;
  if (isSchema && !Array.isArray(node)) yield { schema: node as Record<string, unknown>, at };
  for (const [key, value] of Object.entries(node)) {
    const here = `${at}/${key}`;
    const isOne = ['schema', 'items', 'additionalProperties', 'propertyNames', 'not'].includes(key);
    const isMany = ['anyOf', 'oneOf', 'allOf', 'prefixItems', 'properties', 'schemas', '$defs'].includes(key);
    if (isMany && (isSchema || key === 'schemas')) {
      for (const [name, one] of Object.entries(value as object))
        yield* schemasIn(one, `${here}/${name}`, true);
    } else if (isOne) yield* schemasIn(value, here, true);
    else if (!isSchema) yield* schemasIn(value, here);
  }
}

const TYPES = ['string', 'number', 'integer', 'boolean', 'null', 'array', 'object'];

function checkSchema(schema: Record<string, unknown>, at: string, document: Document): void {
  if ('type' in schema) for (const type of [schema.type].flat()) expect(TYPES, at).toContain(type);
  if (typeof schema.pattern === 'string')
    expect(() => new RegExp(String(schema.pattern), 'u'), at).not.toThrow();
  if (Array.isArray(schema.required)) {
    expect(new Set(schema.required).size, at).toBe(schema.required.length);
    const known = Object.keys((schema.properties as object | undefined) ?? {});
    if (known.length > 0) expect(known, at).toEqual(expect.arrayContaining(schema.required as string[]));
  }
  if ('enum' in schema) expect((schema.enum as unknown[]).length, at).toBeGreaterThan(0);
  for (const key of ['minLength', 'maxLength', 'minItems', 'maxItems']) {
    if (key in schema) expect(Number.isSafeInteger(schema[key]), `${at} ${key}`).toBe(true);
  }
  if (typeof schema.$ref === 'string')
    expect(lookUp(document, schema.$ref), `${at}: ${schema.$ref}`).toBeTypeOf('object');
}

function lookUp(document: unknown, reference: string): unknown {
  expect(reference).toMatch(/^#\//);
  return reference
    .slice(2)
    .split('/')
    .reduce<unknown>((node, key) => (node as Record<string, unknown> | undefined)?.[key], document);
}

describe('a real answer', { timeout: 60_000 }, () => {
  it('has the form that the description declares for its status', async () => {
    const table = await openTable();
    const { shop, tablet, job } = table;
    const { ann, supervisor } = shop.people;
    await tablet.perform(job.id, { technician: ann, supervisor }, shop.kit, { entries: 60 });
    setClocks(tablet);
    await tablet.sync();
    const late = (operation: Operation) => Number(operation.method === 'GET');
    for (const operation of allOperations().toSorted((a, b) => late(a) - late(b))) {
      const answer = await call(table, operation);
      if (answer.status >= 300) continue;
      const what = `${nameOf(operation)} ${answer.status}`;
      expect([operation.status ?? 200, operation.statusAgain], what).toContain(answer.status);
      const type = answer.headers.get('content-type')?.split(';')[0] ?? '';
      if (operation.answerTypes !== undefined) expect(operation.answerTypes, what).toContain(type);
      else {
        expect(type, what).toBe('application/json');
        const { error } = operation.answer.safeParse(answer.body);
        expect(error?.issues ?? [], what).toEqual([]);
      }
    }
  });
});
