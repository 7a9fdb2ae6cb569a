import type { IncomingMessage, OutgoingHttpHeader, ServerResponse } from 'node:http';

const YEAR_SECONDS = 31_536_000;
const NO_FRAMES = "frame-ancestors 'none'";
const DATA_POLICY = `default-src 'none'; ${NO_FRAMES}`;

/** What every answer carries, whoever makes it. */
function baseHeaders(isHttps: boolean): Record<string, string> {
  return {
    'x-content-type-options': 'nosniff',
    'x-frame-options': 'DENY',
    'referrer-policy': 'same-origin',
    'cross-origin-opener-policy': 'same-origin',
    'cross-origin-resource-policy': 'same-origin',
    'permissions-policy':
      'camera=(self), screen-wake-lock=(self), geolocation=(), microphone=(), payment=(), usb=()',
    ...(isHttps ? { 'strict-transport-security': `max-age=${YEAR_SECONDS}` } : {}),
  };
}

/**
 * Makes a response add the security headers at the moment its head is written, so that they also reach
 * what Astro's handler answers. Astro hashes its own scripts into a content policy, and a prerendered
 * page carries that policy in a meta element, where `frame-ancestors` is not allowed: it is added here.
 */
export function addSecurityHeaders(
  request: IncomingMessage,
  response: ServerResponse,
  isHttps: boolean,
): void {
  const isApi = request.url?.startsWith('/api/') ?? false;
  const writeHead = response.writeHead.bind(response);

  function writeSecureHead(
    status: number,
    reasonOrHeaders?: string | Headers,
    maybeHeaders?: Headers,
  ): ServerResponse {
    const given = typeof reasonOrHeaders === 'object' ? reasonOrHeaders : maybeHeaders;
    for (const [name, value] of Object.entries(given ?? {})) {
      if (value !== undefined) response.setHeader(name, value);
    }
    for (const [name, value] of Object.entries(baseHeaders(isHttps))) response.setHeader(name, value);
    response.setHeader('content-security-policy', contentPolicy(response, isApi));
    if (!response.hasHeader('cache-control')) response.setHeader('cache-control', 'private, no-store');
    return writeHead(status);
  }
  response.writeHead = writeSecureHead as typeof response.writeHead;
}

type Headers = Record<string, OutgoingHttpHeader | undefined>;

function contentPolicy(response: ServerResponse, isApi: boolean): string {
  const given = response.getHeader('content-security-policy');
  if (typeof given === 'string') return `${given.replace(/;\s*$/, '')}; ${NO_FRAMES}`;
  return isApi ? DATA_POLICY : NO_FRAMES;
}
