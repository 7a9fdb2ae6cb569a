import type { APIContext } from 'astro';
import type * as z from 'zod';
import type { Role } from '@/domain/role';
import { type Actor, requireRole } from './actor';
import type { Asker } from './asker';
import { type App, getApp } from './compose';
import { type Device, findRequestDevice, requireDevice } from './devices';
import { AppError } from './errors';
import { readBytes, readJson } from './request-body';
import { readSession } from './session';

/*
 * The one way to write an API route. An endpoint states who may ask, what it takes and what it answers; this
 * module checks the request in the same order everywhere, and the same statement makes the OpenAPI file.
 */

/** The largest JSON body that is read. */
export const JSON_LIMIT_BYTES = 1_000_000;

/** Who may ask: anyone, a signed-in person, a tablet with its credential, or people with one of some roles. */
export type Who =
  'anyone' | 'session' | 'tablet' | 'session or tablet' | 'session and tablet' | readonly Role[];

/** A body that is not JSON, such as a photograph. */
export interface RawBody {
  raw: true;
  types: readonly string[];
  maxBytes: number;
}

type Body = z.ZodType | RawBody;
type BodyOf<B> = B extends z.ZodType
  ? z.output<B>
  : B extends RawBody
    ? { bytes: Uint8Array; type: string }
    : undefined;
type QueryOf<Q> = Q extends z.ZodType ? z.output<Q> : undefined;
type ActorOf<W extends Who> = W extends 'session' | 'session and tablet' | readonly Role[]
  ? Actor
  : Actor | undefined;
/** Whoever asks, where it has to be somebody: the person if one is signed in, else the tablet. */
type AskerOf<W extends Who> = W extends 'anyone' ? Asker | undefined : Asker;
type DeviceOf<W extends Who> = W extends 'tablet' | 'session and tablet' ? Device : Device | undefined;

export interface EndpointSpec<W extends Who, B, Q, A extends z.ZodType> {
  method: 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE';
  /** As in OpenAPI, such as `/api/people/{id}`. */
  path: string;
  summary: string;
  who: W;
  body?: B;
  query?: Q;
  answer: A;
  /** The status of a good answer; 200 unless stated. */
  status?: number;
  /** The status of a good answer to what was sent before, where it is another one. */
  statusAgain?: number;
  /** What a good answer may be where it is not JSON. */
  answerTypes?: readonly string[];
  /** The largest JSON body, where it is not the usual limit. */
  maxBytes?: number;
}

export interface EndpointContext<W extends Who, B, Q> {
  app: App;
  request: Request;
  params: Readonly<Record<string, string | undefined>>;
  body: BodyOf<B>;
  query: QueryOf<Q>;
  actor: ActorOf<W>;
  device: DeviceOf<W>;
  asker: AskerOf<W>;
  /** `Set-Cookie` values that go out with the answer. */
  cookies: string[];
}

interface RequestLocals {
  actor?: Actor | undefined;
}

/** The part of Astro's context that an endpoint reads, so that a test can call it with a `Request`. */
export type HandlerContext = Pick<APIContext, 'request'> & {
  params?: APIContext['params'];
  locals?: RequestLocals;
};

export type Operation = EndpointSpec<Who, Body | undefined, z.ZodType | undefined, z.ZodType>;

const operations: Operation[] = [];

/** Every endpoint whose module is loaded; the OpenAPI file is made of these. */
export function listOperations(): readonly Operation[] {
  return operations;
}

/**
 * The methods that an address of the API answers, none if it is no address. Of two that fit, the one with fewer
 * gaps is meant, as the router has it. Only endpoints whose module is loaded are known; the router loads the one
 * that a request is for.
 */
export function methodsAt(pathname: string): string[] {
  const fitting = operations.filter(({ path }) => fits(path, pathname));
  const gaps = (path: string) => path.split('{').length;
  const fewest = Math.min(...fitting.map(({ path }) => gaps(path)));
  const methods = new Set<string>(
    fitting.flatMap(({ path, method }) => (gaps(path) === fewest ? [method] : [])),
  );
  if (methods.has('GET')) methods.add('HEAD');
  return [...methods].sort();
}

function fits(path: string, pathname: string): boolean {
  const parts = path.split('/');
  const given = pathname.split('/');
  return (
    parts.length === given.length &&
    parts.every((part, i) => (part.startsWith('{') ? given[i] !== '' : part === given[i]))
  );
}

/** The answer to a method that an address of the API does not take, or to an address that there is not. */
export function noRouteResponse(app: App, request: Request): Response {
  const methods = methodsAt(new URL(request.url).pathname);
  if (methods.length === 0 || methods.includes(request.method)) {
    return errorResponse(
      app,
      new AppError('not-found', 'There is nothing at this address. /api/openapi.json lists what there is.'),
    );
  }
  const allow = methods.join(', ');
  const response = errorResponse(
    app,
    new AppError(
      'wrong-method',
      `This address takes ${allow}, not ${request.method}. Nothing was changed. /api/openapi.json lists what there is.`,
    ),
  );
  response.headers.set('allow', allow);
  return response;
}

/** Makes an API route from what it takes and answers, and the function that does its work. */
export function endpoint<
  const W extends Who,
  A extends z.ZodType,
  B extends Body | undefined = undefined,
  Q extends z.ZodType | undefined = undefined,
>(
  spec: EndpointSpec<W, B, Q, A>,
  run: (context: EndpointContext<W, B, Q>) => Promise<z.input<A> | Response>,
): (context: HandlerContext) => Promise<Response> {
  operations.push(spec);
  return async ({ request, params = {}, locals }) => {
    const app = await getApp();
    try {
      const cookies: string[] = [];
      const { actor, device } = await whoAsks(app, spec.who, request, locals, cookies);
      const context = {
        app,
        request,
        params,
        cookies,
        query: readQuery(spec.query, request),
        body: await readBody(spec, request),
        actor,
        device,
        asker: actor ?? device,
      } as EndpointContext<W, B, Q>;
      const result = await run(context);
      const response = result instanceof Response ? result : json(result, spec.status ?? 200);
      for (const cookie of cookies) response.headers.append('set-cookie', cookie);
      return response;
    } catch (error) {
      return errorResponse(app, error);
    }
  };
}

/** A JSON answer that no cache keeps. */
export function json(value: unknown, status = 200): Response {
  return Response.json(value, { status, headers: { 'cache-control': 'no-store' } });
}

/** Turns any error into an answer; what was not foreseen is logged and never shown. */
export function errorResponse(app: App, error: unknown): Response {
  if (error instanceof AppError) {
    const { code, message, field, status } = error;
    return json({ error: { code, message, ...(field === undefined ? {} : { field }) } }, status);
  }
  const incident = app.ids.next();
  app.log.error({ err: error, incident }, 'A request failed');
  const message = `Something went wrong on the server. Nothing that was recorded before is lost. Try again; if it stays, tell the owner this number: ${incident}.`;
  return json({ error: { code: 'unexpected', message } }, 500);
}

async function whoAsks(
  app: App,
  who: Who,
  request: Request,
  locals: RequestLocals | undefined,
  cookies: string[],
) {
  const wantsTablet = who === 'tablet' || who === 'session and tablet';
  const mayBeTablet = wantsTablet || who === 'session or tablet';
  const device = wantsTablet
    ? await requireDevice(app.db, request)
    : mayBeTablet
      ? await findRequestDevice(app.db, request)
      : undefined;
  const actor = who === 'tablet' ? undefined : await whoIsSignedIn(app, request, locals, cookies);
  const needsSession = who === 'session' || who === 'session and tablet' || typeof who === 'object';
  if (
    (needsSession && actor === undefined) ||
    (who === 'session or tablet' && actor === undefined && device === undefined)
  ) {
    throw new AppError(
      'not-signed-in',
      'Nobody is signed in here. Sign in and try again; nothing that you recorded is lost.',
    );
  }
  if (typeof who === 'object' && actor !== undefined) requireRole(actor, ...who);
  return { actor, device };
}

async function whoIsSignedIn(
  app: App,
  request: Request,
  locals: RequestLocals | undefined,
  cookies: string[],
) {
  if (locals !== undefined && 'actor' in locals) return locals.actor;
  const session = await readSession(app, request);
  cookies.push(...session.cookies);
  return session.actor;
}

function readQuery(schema: z.ZodType | undefined, request: Request): unknown {
  if (schema === undefined) return undefined;
  return parseOrThrow(schema, Object.fromEntries(new URL(request.url).searchParams));
}

async function readBody(
  spec: Operation | EndpointSpec<Who, unknown, unknown, z.ZodType>,
  request: Request,
): Promise<unknown> {
  const body = spec.body as Body | undefined;
  if (body === undefined) return undefined;
  if ('raw' in body) return readBytes(request, body.types, body.maxBytes);
  return parseOrThrow(body, await readJson(request, spec.maxBytes ?? JSON_LIMIT_BYTES));
}

/** Checks a value against a schema; the error names the path of the first field at fault. */
export function parseOrThrow<S extends z.ZodType>(schema: S, value: unknown): z.output<S> {
  const result = schema.safeParse(value);
  if (result.success) return result.data;
  const issue = result.error.issues[0];
  const path = issue?.path.map(String) ?? [];
  if (issue?.code === 'unrecognized_keys') {
    const field = [...path, issue.keys[0] ?? ''].join('.');
    throw new AppError('invalid-field', `${field} is not a field of this. Leave it out.`, { field });
  }
  const field = path.join('.');
  const where = field === '' ? 'The body' : field;
  const why = isThere(value, issue?.path ?? []) ? (issue?.message ?? 'not valid') : 'is needed';
  throw new AppError('invalid-field', `${where}: ${why}.`, { field: field === '' ? 'body' : field });
}

function isThere(value: unknown, path: readonly PropertyKey[]): boolean {
  return (
    path.reduce<unknown>((found, key) => (found as Record<PropertyKey, unknown>)[key], value) !== undefined
  );
}
