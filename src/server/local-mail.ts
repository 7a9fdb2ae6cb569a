import { randomUUID } from 'node:crypto';
import { once } from 'node:events';
import { createServer, type IncomingMessage } from 'node:http';
import type { AddressInfo } from 'node:net';
import * as z from 'zod';
import type { MailSettings } from './settings';

/*
 * The mail service's fake, for development, tests and a workshop without mail: the same calls over HTTP on this
 * machine, and nothing leaves it. It is as strict as the service is about what it takes.
 */

const letterSchema = z.strictObject({
  from: z.string().min(3),
  to: z.email(),
  subject: z.string().min(1).max(500),
  text: z.string().min(1),
});

/** A letter as the fake took it. */
export type TakenLetter = z.infer<typeof letterSchema> & { id: string };

export interface LocalMail extends MailSettings {
  /** What was taken, the oldest first. */
  letters: readonly TakenLetter[];
  /** The next calls are answered with these instead, one each. */
  failNext(...answers: { status: number; name: string; message: string }[]): void;
  stop(): Promise<void>;
}

const LARGEST_BYTES = 1_000_000;
const KEPT = 500;

/** Starts the fake on a free port of this machine. */
export async function startLocalMail(from = 'Witnessmark <record@witnessmark.example>'): Promise<LocalMail> {
  const apiKey = `re_${randomUUID()}`;
  const letters: TakenLetter[] = [];
  const known = new Map<string, string>();
  const failures: { status: number; name: string; message: string }[] = [];
  const server = createServer((request, response) => {
    take(request).then(
      ({ status, body }) => response.writeHead(status, { 'content-type': 'application/json' }).end(body),
      () => response.writeHead(500).end('{}'),
    );
  });

  async function take(request: IncomingMessage): Promise<{ status: number; body: string }> {
    const text = await readText(request);
    const failure = failures.shift();
    if (failure !== undefined) return refusal(failure.status, failure.name, failure.message);
    if (request.headers.authorization !== `Bearer ${apiKey}`)
      return refusal(401, 'invalid_api_key', 'API key is invalid');
    if (request.method !== 'POST' || request.url !== '/emails')
      return refusal(404, 'not_found', 'There is no such call');
    const letter = letterSchema.safeParse(parse(text));
    if (!letter.success)
      return refusal(
        422,
        'validation_error',
        `Invalid \`${letter.error.issues[0]?.path.join('.') ?? ''}\` field.`,
      );
    const key = request.headers['idempotency-key'];
    const again = typeof key === 'string' ? known.get(key) : undefined;
    if (again !== undefined) return { status: 200, body: JSON.stringify({ id: again }) };
    const id = randomUUID();
    if (typeof key === 'string') known.set(key, id);
    letters.push({ ...letter.data, id });
    if (letters.length > KEPT) letters.shift();
    return { status: 200, body: JSON.stringify({ id }) };
  }

  server.listen(0, '127.0.0.1');
  await once(server, 'listening');
  server.unref();
  return {
    ...{ apiKey, from, letters },
    baseUrl: `http://127.0.0.1:${(server.address() as AddressInfo).port}`,
    failNext: (...answers) => void failures.push(...answers),
    stop: async () => {
      const closed = once(server, 'close');
      server.close();
      server.closeAllConnections();
      await closed;
    },
  };
}

function refusal(statusCode: number, name: string, message: string): { status: number; body: string } {
  return { status: statusCode, body: JSON.stringify({ statusCode, name, message }) };
}

function parse(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch (error) {
    if (error instanceof SyntaxError) return undefined;
    throw error;
  }
}

async function readText(request: IncomingMessage): Promise<string> {
  const chunks: Buffer[] = [];
  let size = 0;
  for await (const chunk of request as AsyncIterable<Buffer>) {
    size += chunk.length;
    if (size > LARGEST_BYTES) throw new RangeError('The letter is too large.');
    chunks.push(chunk);
  }
  return Buffer.concat(chunks).toString('utf8');
}
