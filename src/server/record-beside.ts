import type { Recorded } from '@/domain/entry';
import { hashJson } from '@/domain/canonical';
import { sha256Hex } from './crypto';
import type { Db } from './database';

/*
 * What is kept beside the trails and named by them: plans by their hash, and entries that were refused by the id and
 * the content that the trail says. Used by the check of the record alone.
 */

/** Every plan that is kept, and whether its content is what its hash was made of. */
export async function readPlans(db: Db): Promise<ReadonlyMap<string, boolean>> {
  const rows = await db.selectFrom('plan').select(['hash', 'body']).execute();
  return new Map(rows.map(({ hash, body }) => [hash, sha256Hex(body) === hash]));
}

/** Why the plan that an entry was made under does not stand for it. */
export function whyNotPlan(plans: ReadonlyMap<string, boolean>, { plan }: Recorded): string | undefined {
  const isWhole = plans.get(plan);
  if (isWhole === undefined) return 'The plan that it was made under is gone.';
  return isWhole ? undefined : 'The plan that it was made under is not what its hash was made of.';
}

/** Why what was refused is not kept as the trail says that it came. */
export async function whyNotKept(db: Db, job: string, recorded: Recorded): Promise<string | undefined> {
  if (recorded.kind !== 'refused') return undefined;
  const { content, code, reason, author } = recorded.data;
  const row = await db
    .selectFrom('refused_entry')
    .select(['job_id', 'content_hash', 'body', 'code', 'message', 'by_person'])
    .where('id', '=', recorded.id)
    .executeTakeFirst();
  if (row === undefined) return 'What was refused here is gone.';
  const isSaid =
    row.job_id === job &&
    row.content_hash === content &&
    row.code === code &&
    row.message === reason &&
    row.by_person === (author ?? null);
  return isSaid && isContent(row.body, content) ? undefined : 'What was refused here is not kept as it came.';
}

/** What could be hashed is named by its entry's hash, anything else by that of its whole text. */
function isContent(body: string, content: string): boolean {
  if (sha256Hex(body) === content) return true;
  try {
    const { entry } = JSON.parse(body) as { entry?: unknown };
    return entry !== undefined && hashJson(entry, sha256Hex) === content;
  } catch (error) {
    if (error instanceof RangeError || error instanceof SyntaxError) return false;
    throw error;
  }
}
