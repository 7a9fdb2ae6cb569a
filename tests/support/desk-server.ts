import { vi } from 'vitest';

/** What the server says to one request: a body, or a status with one. */
export type DeskAnswer =
  { status?: number; body: unknown } | ((body: unknown) => { status?: number; body: unknown });

export interface DeskRequest {
  method: string;
  path: string;
  body: unknown;
}

/**
 * Stands in for the server of a desk page: answers each "METHOD /path" as given, and remembers what was asked.
 * An answer may be changed while the test runs. What nobody answers fails as a network that is away does.
 */
export function answerDesk(answers: Record<string, DeskAnswer>): { requests: DeskRequest[] } {
  const requests: DeskRequest[] = [];
  vi.stubGlobal('fetch', (path: string, init: RequestInit = {}) => {
    const method = init.method ?? 'GET';
    const body: unknown = typeof init.body === 'string' ? JSON.parse(init.body) : undefined;
    requests.push({ method, path, body });
    const answer = answers[`${method} ${path}`];
    if (answer === undefined) return Promise.reject(new TypeError('Failed to fetch'));
    const given = typeof answer === 'function' ? answer(body) : answer;
    return Promise.resolve(Response.json(given.body, { status: given.status ?? 200 }));
  });
  return { requests };
}

/** A refusal as the server words it. */
export function refused(status: number, message: string, field?: string): { status: number; body: unknown } {
  return { status, body: { error: { code: 'refused', message, ...(field === undefined ? {} : { field }) } } };
}
