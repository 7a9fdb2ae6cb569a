import { AppError } from './errors';
import { isLoopback } from './settings';

const SAFE_METHODS = new Set(['GET', 'HEAD', 'OPTIONS']);

/** Refuses a request that was sent to another host name than the workshop's: an attack by name, or a wrong set-up. */
export function requireOwnHost(publicUrl: string, request: Request): void {
  const host = request.headers.get('host') ?? new URL(request.url).host;
  if (host === new URL(publicUrl).host) return;
  if (URL.canParse(`http://${host}`) && isLoopback(new URL(`http://${host}`).hostname)) return;
  throw new AppError(
    'foreign-host',
    `This server does not answer for ${host.slice(0, 100)}. Open ${publicUrl}, or set PUBLIC_URL to the address that people type.`,
  );
}

/** Refuses a change that another site asks a signed-in browser for. */
export function requireOwnOrigin(publicUrl: string, request: Request): void {
  if (SAFE_METHODS.has(request.method)) return;
  const origin = request.headers.get('origin');
  const site = request.headers.get('sec-fetch-site');
  const isOwnSite = site === null || site === 'same-origin' || site === 'none';
  const isOwnOrigin = origin === null || isOurs(publicUrl, origin);
  if (isOwnSite && isOwnOrigin) return;
  throw new AppError(
    'foreign-origin',
    `Changes are only taken from this site's own pages. Open ${publicUrl} and do it there.`,
  );
}

/** On this machine alone, its several names are one site. */
function isOurs(publicUrl: string, origin: string): boolean {
  if (origin === publicUrl) return true;
  if (!URL.canParse(origin)) return false;
  const own = new URL(publicUrl);
  const other = new URL(origin);
  return (
    isLoopback(own.hostname) &&
    isLoopback(other.hostname) &&
    own.protocol === other.protocol &&
    own.port === other.port
  );
}
