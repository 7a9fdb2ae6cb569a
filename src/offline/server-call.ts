import * as z from 'zod/mini';
import type { Surroundings } from './surroundings';
import { credentialOf, findDevice, noteForgotten, type Device } from './device';

/** Why something that needs the server did not come about. It can always be tried again. */
export interface Trouble {
  ok: false;
  code: string;
  why: string;
  /** The server was not reached at all. */
  offline?: true | undefined;
}

export type Outcome = { ok: true } | Trouble;

/** An answer of the server that has the form expected of it, or why there is none. */
export type Answer<T> = { ok: true; body: T } | Trouble;

interface Call<S extends z.ZodMiniType> {
  method?: 'GET' | 'POST' | 'PUT' | 'PATCH';
  path: string;
  /** JSON, or bytes with their type. */
  body?: unknown;
  bytes?: { data: ArrayBuffer; type: string };
  answer: S;
  timeoutMs?: number;
  /** The session alone counts: for what a tablet asks that the workshop does not know (any more). */
  without?: 'tablet';
}

const SECOND = 1000;
const TIMEOUT_MS = 30 * SECOND;

const refusalBody = z.object({ error: z.object({ code: z.string(), message: z.string() }) });

/**
 * Asks the server, with the tablet's credential if there is one. Never throws for what the network or the
 * server did: a portal's page, a cut line and an error of the server are all told as trouble, and none of
 * them is final.
 */
export async function callServer<S extends z.ZodMiniType>(
  s: Surroundings,
  call: Call<S>,
): Promise<Answer<z.output<S>>> {
  const device = call.without === 'tablet' ? undefined : await findDevice(s.db);
  const headers = headersOf(call, device);
  const body = call.bytes?.data ?? (call.body === undefined ? undefined : JSON.stringify(call.body));
  let response: Response;
  let text: string;
  try {
    response = await s.fetch(call.path, {
      method: call.method ?? 'GET',
      headers,
      credentials: 'same-origin',
      signal: AbortSignal.timeout(call.timeoutMs ?? TIMEOUT_MS),
      ...(body === undefined ? {} : { body }),
    });
    text = await response.text();
  } catch {
    // fetch tells every failure of the network by throwing, and why is not for a page to know.
    return { ...NO_NETWORK };
  }
  const answer = readAnswer(response, text, call.answer);
  if (answer.ok || !device) return answer;
  if (answer.code !== 'unknown-tablet' && answer.code !== 'lost-tablet') return answer;
  await noteForgotten(s.db, device);
  return answer.code === 'lost-tablet' ? answer : { ...ENROL_AGAIN };
}

export const NO_NETWORK: Trouble = {
  ok: false,
  code: 'no-network',
  why: 'The server was not reached. Nothing is lost: the tablet tries again by itself.',
  offline: true,
};

const ENROL_AGAIN: Trouble = {
  ok: false,
  code: 'enrol-again',
  why: 'This tablet must be enrolled again. Nothing is lost: sign in on it, enrol it, and everything is sent.',
};

function headersOf(call: Pick<Call<z.ZodMiniType>, 'body' | 'bytes'>, device: Device | undefined): Headers {
  const headers = new Headers({ accept: 'application/json' });
  const credential = device && credentialOf(device);
  if (credential !== undefined) headers.set('authorization', `Tablet ${credential}`);
  if (call.body !== undefined) headers.set('content-type', 'application/json');
  if (call.bytes) headers.set('content-type', call.bytes.type);
  return headers;
}

function readAnswer<S extends z.ZodMiniType>(
  response: Response,
  text: string,
  answer: S,
): Answer<z.output<S>> {
  const json = parseJson(text);
  if (!response.ok) {
    const refusal = z.safeParse(refusalBody, json);
    if (refusal.success) return { ok: false, code: refusal.data.error.code, why: refusal.data.error.message };
    return {
      ok: false,
      code: `status-${response.status}`,
      why: `The server could not answer (${response.status}). Nothing is lost: the tablet tries again by itself.`,
    };
  }
  const read = z.safeParse(answer, json);
  if (read.success) return { ok: true, body: read.data };
  return {
    ok: false,
    code: 'unreadable-answer',
    why: 'Something other than the workshop’s server answered. Nothing is lost: check the network’s sign-in page, then try again.',
  };
}

function parseJson(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch {
    // Not JSON is one of the answers that the caller tells apart.
    return undefined;
  }
}
