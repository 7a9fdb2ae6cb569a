import type { MiddlewareHandler } from 'astro';
import { type App, getApp } from '@/server/compose';
import { AppError } from '@/server/errors';
import { errorResponse, noRouteResponse } from '@/server/http';
import { requireOwnHost, requireOwnOrigin } from '@/server/request-origin';
import { readSession } from '@/server/session';

/** Pages that open without signing in. */
const OPEN_PAGES = ['/sign-in', '/first-owner', '/set-password', '/offline', '/pack'];

/**
 * Stands before every page and route that is made on request: refuses foreign hosts and origins, finds out who
 * is signed in, and sends people who have to sign in there.
 */
export const onRequest: MiddlewareHandler = async (context, next) => {
  // At build time there is no data folder; a prerendered page holds nothing of anybody.
  if (context.isPrerendered) return next();
  const app = await getApp();
  const { pathname, search } = context.url;
  const isApi = pathname.startsWith('/api/');
  try {
    requireOwnHost(app.settings.publicUrl, context.request);
    requireOwnOrigin(app.settings.publicUrl, context.request);
    const { actor, cookies } = await readSession(app, context.request);
    context.locals.actor = actor;
    if (actor === undefined && !isApi && needsSignIn(pathname)) {
      return context.redirect(`/sign-in?next=${encodeURIComponent(pathname + search)}`, 303);
    }
    const response = isApi ? asJsonError(app, context.request, await next()) : await next();
    for (const cookie of cookies) response.headers.append('set-cookie', cookie);
    return response;
  } catch (error) {
    if (isApi || error instanceof AppError) return errorResponse(app, error);
    throw error;
  }
};

function needsSignIn(pathname: string): boolean {
  if (pathname.startsWith('/_')) return false;
  return !OPEN_PAGES.some((page) => pathname === page || pathname.startsWith(`${page}/`));
}

/** A path or method that no route answers gets the same shape of error as everything else. */
function asJsonError(app: App, request: Request, response: Response): Response {
  if (response.status < 400 || response.headers.get('content-type')?.startsWith('application/json'))
    return response;
  if (response.status === 404 || response.status === 405) return noRouteResponse(app, request);
  return errorResponse(app, new Error(`A route answered ${response.status} without JSON`));
}
