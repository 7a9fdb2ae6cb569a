import type { Actor } from './actor';
import type { App } from './compose';
import { AppError } from './errors';
import { getReadableJob, getVisibleJob } from './job-access';
import type { JobRow } from './job-rows';

/** The job that a page is about, or undefined where the person may not see it: both read as "not there". */
export function findJobForPage(
  app: App,
  actor: Actor | undefined,
  id: string | undefined,
): Promise<JobRow | undefined> {
  return findWith(getVisibleJob, app, actor, id);
}

/** The same for pages that show the whole trail. */
export function findReadableJobForPage(
  app: App,
  actor: Actor | undefined,
  id: string | undefined,
): Promise<JobRow | undefined> {
  return findWith(getReadableJob, app, actor, id);
}

async function findWith(
  get: typeof getVisibleJob,
  app: App,
  actor: Actor | undefined,
  id: string | undefined,
): Promise<JobRow | undefined> {
  if (actor === undefined || id === undefined) return undefined;
  try {
    return await get(app.db, actor, id);
  } catch (error) {
    if (error instanceof AppError && error.code === 'not-found') return undefined;
    throw error;
  }
}
