import type { IncomingMessage } from 'node:http';

const MEGABYTE = 1_048_576;
const PHOTOGRAPH_LIMIT = 12 * MEGABYTE;
const JSON_LIMIT = MEGABYTE;

/** The largest body that a path takes, in bytes. */
export function bodyLimit(pathname: string): number {
  return pathname === '/api/photos' || pathname.startsWith('/api/photos/') ? PHOTOGRAPH_LIMIT : JSON_LIMIT;
}

/**
 * A body that has been read, in the only form that Astro's handler passes on untouched: an object
 * that can be iterated and has no keys of its own.
 */
export class ReadBody {
  readonly #chunks: readonly Uint8Array[];

  constructor(chunks: readonly Uint8Array[]) {
    this.#chunks = chunks;
  }

  async *[Symbol.asyncIterator](): AsyncGenerator<Uint8Array> {
    yield* this.#chunks;
  }
}

/**
 * Reads a whole body, or gives 'too large' as soon as it passes the limit, by its announced length or,
 * in chunks, by what has come. The handler therefore never sees half a body.
 */
export async function readBody(request: IncomingMessage, limit: number): Promise<ReadBody | 'too large'> {
  if (Number(request.headers['content-length'] ?? 0) > limit) return 'too large';
  const chunks: Uint8Array[] = [];
  let length = 0;
  return new Promise((resolve, reject) => {
    request.on('data', (chunk: Uint8Array) => {
      length += chunk.byteLength;
      if (length > limit) {
        request.pause();
        request.removeAllListeners('data');
        resolve('too large');
      } else {
        chunks.push(chunk);
      }
    });
    request.once('end', () => resolve(new ReadBody(chunks)));
    request.once('error', () => reject(new ConnectionLostError()));
    request.once('close', () => reject(new ConnectionLostError()));
  });
}

/** The client went away in the middle of its body; there is nobody to answer. */
export class ConnectionLostError extends Error {
  readonly code = 'connection-lost';
}
