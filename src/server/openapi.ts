import * as z from 'zod';
import { listOperations, type Operation, type Who } from './http';

const errorAnswer = z.strictObject({
  error: z.strictObject({ code: z.string(), message: z.string(), field: z.string().optional() }),
});

/** The OpenAPI 3.1 description, made from the same schemas that check the requests. */
export function openApiDocument(publicUrl: string): Record<string, unknown> {
  const paths: Record<string, Record<string, unknown>> = {};
  const ordered = [...listOperations()].sort((a, b) => a.path.localeCompare(b.path, 'en'));
  for (const operation of ordered) {
    (paths[operation.path] ??= {})[operation.method.toLowerCase()] = describe(operation);
  }
  return {
    openapi: '3.1.0',
    info: {
      title: 'Witnessmark',
      version: '1',
      description: 'Errors are { error: { code, message, field? } } with a stable code.',
    },
    servers: [{ url: publicUrl }],
    paths,
    components: {
      schemas: { Error: toJsonSchema(errorAnswer, 'output') },
      securitySchemes: {
        session: { type: 'apiKey', in: 'cookie', name: 'witnessmark.session_token' },
        tablet: { type: 'apiKey', in: 'header', name: 'Authorization', description: 'Tablet ID.CREDENTIAL' },
      },
    },
  };
}

function describe(operation: Operation): Record<string, unknown> {
  const { who, status = 200, statusAgain } = operation;
  const roles = typeof who === 'object' ? ` For: ${who.join(', ')}.` : '';
  const parameters = [...pathParameters(operation.path), ...queryParameters(operation.query)];
  return {
    summary: operation.summary,
    ...(roles === '' ? {} : { description: roles.trim() }),
    ...(parameters.length === 0 ? {} : { parameters }),
    ...(operation.body === undefined
      ? {}
      : { requestBody: { required: true, content: bodyContent(operation.body) } }),
    security: security(who),
    responses: {
      [status]: { description: 'Done', content: answerContent(operation) },
      ...(statusAgain === undefined
        ? {}
        : { [statusAgain]: { description: 'Done before', content: answerContent(operation) } }),
      default: {
        description: 'Not done',
        content: { 'application/json': { schema: { $ref: '#/components/schemas/Error' } } },
      },
    },
  };
}

function security(who: Who): Record<string, never[]>[] {
  if (who === 'anyone') return [{}];
  if (who === 'tablet') return [{ tablet: [] }];
  if (who === 'session and tablet') return [{ session: [], tablet: [] }];
  if (who === 'session or tablet') return [{ session: [] }, { tablet: [] }];
  return [{ session: [] }];
}

function pathParameters(path: string) {
  return [...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => ({
    name,
    in: 'path',
    required: true,
    schema: { type: 'string' },
  }));
}

function queryParameters(query: z.ZodType | undefined) {
  if (query === undefined) return [];
  const schema = toJsonSchema(query, 'input');
  const required = Array.isArray(schema.required) ? schema.required : [];
  return Object.entries(schema.properties ?? {}).map(([name, property]) => ({
    name,
    in: 'query',
    required: required.includes(name),
    schema: property as unknown,
  }));
}

function bodyContent(body: NonNullable<Operation['body']>): Record<string, unknown> {
  if (!('raw' in body)) return { 'application/json': { schema: toJsonSchema(body, 'input') } };
  return bytesContent(body.types);
}

function answerContent({ answer, answerTypes }: Operation): Record<string, unknown> {
  if (answerTypes !== undefined) return bytesContent(answerTypes);
  return { 'application/json': { schema: toJsonSchema(answer, 'output') } };
}

/** Bytes as they are: in OpenAPI 3.1 a content type says all there is to say of them. */
function bytesContent(types: readonly string[]): Record<string, unknown> {
  return Object.fromEntries(types.map((type) => [type, {}]));
}

function toJsonSchema(schema: z.ZodType, io: 'input' | 'output'): Record<string, unknown> {
  const made: Record<string, unknown> = { ...z.toJSONSchema(schema, { io, unrepresentable: 'any' }) };
  delete made.$schema;
  return made;
}
