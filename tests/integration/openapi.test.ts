import { describe, expect, it } from 'vitest';
import { GET } from '@/pages/api/openapi.json';
import { openTestApp } from '../support/database';
import { newBrowser } from '../support/requests';

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
