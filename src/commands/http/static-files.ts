import { createHash } from 'node:crypto';
import { readdir, readFile } from 'node:fs/promises';
import type { IncomingMessage, ServerResponse } from 'node:http';
import path from 'node:path';
import { gzipSync } from 'node:zlib';

const CONTENT_TYPES: Readonly<Record<string, string>> = {
  '.css': 'text/css; charset=utf-8',
  '.html': 'text/html; charset=utf-8',
  '.ico': 'image/x-icon',
  '.js': 'text/javascript; charset=utf-8',
  '.json': 'application/json; charset=utf-8',
  '.png': 'image/png',
  '.svg': 'image/svg+xml',
  '.txt': 'text/plain; charset=utf-8',
  '.wasm': 'application/wasm',
  '.webmanifest': 'application/manifest+json; charset=utf-8',
  '.webp': 'image/webp',
  '.woff': 'font/woff',
  '.woff2': 'font/woff2',
};
const PACKED_TYPES = new Set(['.png', '.webp', '.woff', '.woff2', '.ico']);
const PACK_FROM_BYTES = 1024;

interface StaticFile {
  body: Buffer;
  packed: Buffer | undefined;
  contentType: string;
  cacheControl: string;
  etag: string;
}

/** The built files, by every path that they answer to. */
export type StaticFiles = ReadonlyMap<string, StaticFile>;

/** Reads the whole built client into memory: a few megabytes, and no path of a request ever reaches the disk. */
export async function readStaticFiles(folder: string): Promise<StaticFiles> {
  const files = new Map<string, StaticFile>();
  for (const entry of await readdir(folder, { recursive: true, withFileTypes: true })) {
    if (!entry.isFile()) continue;
    const file = path.join(entry.parentPath, entry.name);
    const url = `/${path.relative(folder, file).split(path.sep).join('/')}`;
    const read = describe(url, await readFile(file));
    for (const name of namesOf(url)) files.set(name, read);
  }
  return files;
}

function describe(url: string, body: Buffer): StaticFile {
  const extension = path.extname(url);
  const isWorthPacking = body.length >= PACK_FROM_BYTES && !PACKED_TYPES.has(extension);
  return {
    body,
    packed: isWorthPacking ? gzipSync(body) : undefined,
    contentType: CONTENT_TYPES[extension] ?? 'application/octet-stream',
    // A name under _astro holds the hash of its content; anything else may change with the next release.
    cacheControl: url.startsWith('/_astro/') ? 'public, max-age=31536000, immutable' : 'no-cache',
    etag: `"${createHash('sha256').update(body).digest('base64url').slice(0, 22)}"`,
  };
}

/** A prerendered page is asked for with and without the slash at its end. */
function namesOf(url: string): string[] {
  if (!url.endsWith('/index.html')) return [url];
  const folder = url.slice(0, -'index.html'.length);
  return [url, folder, ...(folder === '/' ? [] : [folder.slice(0, -1)])];
}

/** Answers a request from the built files; gives false when there is none by that path. */
export function serveStatic(
  files: StaticFiles,
  pathname: string,
  request: IncomingMessage,
  response: ServerResponse,
): boolean {
  if (request.method !== 'GET' && request.method !== 'HEAD') return false;
  const file = files.get(pathname);
  if (file === undefined) return false;
  sendFile(file, 200, request, response);
  return true;
}

/** Answers 404 with the prerendered page for it, if there is one. */
export function serveNotFound(
  files: StaticFiles,
  request: IncomingMessage,
  response: ServerResponse,
): boolean {
  const page = files.get('/404.html');
  if (page === undefined) return false;
  sendFile(page, 404, request, response);
  return true;
}

function sendFile(
  file: StaticFile,
  status: number,
  request: IncomingMessage,
  response: ServerResponse,
): void {
  const headers = { etag: file.etag, 'cache-control': file.cacheControl, vary: 'accept-encoding' };
  if (status === 200 && request.headers['if-none-match'] === file.etag) {
    response.writeHead(304, headers);
    response.end();
    return;
  }
  const takesGzip = /\bgzip\b/.test(request.headers['accept-encoding']?.toString() ?? '');
  const packed = takesGzip ? file.packed : undefined;
  const body = packed ?? file.body;
  response.writeHead(status, {
    ...headers,
    'content-type': file.contentType,
    'content-length': body.length,
    ...(packed === undefined ? {} : { 'content-encoding': 'gzip' }),
  });
  response.end(request.method === 'HEAD' ? undefined : body);
}
