import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http';
import { CLIENT_ADDRESS_HEADER } from '@/server/auth';
import type { Settings } from '@/server/settings';
import { isAllowedHost } from './allowed-host';
import { sendError } from './answer';
import { bodyLimit, ConnectionLostError, readBody, type ReadBody } from './body';
import { clientAddress } from './client-address';
import { addSecurityHeaders } from './response-headers';
import { serveNotFound, serveStatic, type StaticFiles } from './static-files';

const FORWARDED_HEADERS = ['forwarded', 'x-real-ip', CLIENT_ADDRESS_HEADER];
/** What any address may take; which of them one does take is said where it is answered. */
const METHODS = ['GET', 'HEAD', 'POST', 'PUT', 'PATCH', 'DELETE', 'OPTIONS'];
const MINUTE = 60_000;
/** How long the rest of an oversized body is read and thrown away, so that the answer can be read first. */
const DISCARD_MS = 2_000;

/** Astro's built handler, as its Node adapter exports it in middleware mode. */
export type PageHandler = (
  request: IncomingMessage,
  response: ServerResponse,
  next: (error?: unknown) => void,
) => Promise<void>;

interface Doorway {
  settings: Pick<Settings, 'port' | 'publicUrl' | 'trustedProxies'>;
  files: StaticFiles;
  handler: PageHandler;
}

/**
 * The only way in. Nothing behind it may be reached with a foreign Host, a forwarded header that nobody
 * vouches for, or a body over its limit; every answer leaves with the security headers.
 */
export function createHttpServer(doorway: Doorway): Server {
  const server = createServer({ requestTimeout: 2 * MINUTE, headersTimeout: MINUTE }, (request, response) => {
    answer(doorway, request, response).catch((error: unknown) => {
      if (error instanceof ConnectionLostError) return;
      console.error(error);
      if (response.headersSent) response.destroy();
      else
        sendError(
          response,
          500,
          'unexpected',
          'The server could not answer. What you sent may not be stored. Try again.',
        );
    });
  });
  return server;
}

async function answer(doorway: Doorway, request: IncomingMessage, response: ServerResponse): Promise<void> {
  const { settings, files } = doorway;
  const isHttps = settings.publicUrl.startsWith('https:');
  addSecurityHeaders(request, response, isHttps);

  if (!isAllowedHost(request.headers.host, settings.publicUrl, settings.port)) {
    sendError(response, 421, 'foreign-host', `This server answers at ${settings.publicUrl} only.`);
    return;
  }
  if (!METHODS.includes(request.method ?? '')) {
    response.setHeader('allow', METHODS.join(', '));
    sendError(
      response,
      405,
      'wrong-method',
      `This server does not take ${request.method}. Nothing was changed.`,
    );
    return;
  }
  const pathname = pathOf(request.url);
  if (pathname === undefined) {
    sendError(response, 400, 'malformed-address', 'The address cannot be read.');
    return;
  }
  if (serveStatic(files, pathname, request, response)) return;

  replaceForwardedHeaders(request, settings, isHttps);
  const body = await readBody(request, bodyLimit(pathname));
  if (body === 'too large') {
    refuseBody(request, response, bodyLimit(pathname));
    return;
  }
  await passOn(doorway, pathname, Object.assign(request, { body }), response);
}

function pathOf(url: string | undefined): string | undefined {
  try {
    return url?.startsWith('/') ? decodeURI(new URL(`http://localhost${url}`).pathname) : undefined;
  } catch {
    return undefined;
  }
}

/** What a client says about itself is dropped; what is known is put in its place. */
function replaceForwardedHeaders(
  request: IncomingMessage,
  settings: Doorway['settings'],
  isHttps: boolean,
): void {
  const { headers } = request;
  const forwardedFor = [headers['x-forwarded-for'] ?? []].flat().join(',');
  const address = clientAddress(request.socket.remoteAddress, forwardedFor, settings.trustedProxies);
  for (const name of Object.keys(headers)) {
    if (name.startsWith('x-forwarded-') || FORWARDED_HEADERS.includes(name))
      Reflect.deleteProperty(headers, name);
  }
  headers[CLIENT_ADDRESS_HEADER] = address;
  headers['x-forwarded-for'] = address;
  headers['x-forwarded-proto'] = isHttps ? 'https' : 'http';
}

function refuseBody(request: IncomingMessage, response: ServerResponse, limit: number): void {
  response.setHeader('connection', 'close');
  const megabytes = Math.round(limit / 1_048_576);
  sendError(response, 413, 'body-too-large', `The body is larger than ${megabytes} MB. Nothing was stored.`);
  request.resume();
  const discard = setTimeout(() => request.destroy(), DISCARD_MS);
  request.once('close', () => clearTimeout(discard));
}

async function passOn(
  { files, handler }: Doorway,
  pathname: string,
  request: IncomingMessage & { body: ReadBody },
  response: ServerResponse,
): Promise<void> {
  await handler(request, response, (error) => {
    if (error instanceof Error) throw error;
    if (!pathname.startsWith('/api/') && serveNotFound(files, request, response)) return;
    sendError(response, 404, 'not-found', 'There is nothing at this address.');
  });
}
