import { isLoopback } from '@/server/settings';

/**
 * Whether a request's Host header names this installation.
 *
 * A page on a foreign name that resolves to this machine could otherwise read the workshop's answers.
 * This machine's own names are always allowed on the listening port: a browser never lets a foreign
 * page send them, and a health check needs no public name.
 */
export function isAllowedHost(host: string | undefined, publicUrl: string, port: number): boolean {
  if (host === undefined || /[^\w.:[\]-]/.test(host)) return false;
  const ours = new URL(publicUrl);
  const spelled = `${ours.protocol}//${host}`;
  if (!URL.canParse(spelled)) return false;
  const asked = new URL(spelled);
  if (asked.host === ours.host) return true;
  return isLoopback(asked.hostname) && host.endsWith(`:${port}`);
}
