/* A judgement given at a desk: an entry like any other, signed here by its author's key, and sent at once. */
import type { Offline } from './offline';
import { makeAvailableOffline, pullJobList, pullWorkshop } from './prefetch';
import { recordEntries, type Draft } from './record';
import type { Outcome } from './server-call';

/** Records it on the job as the server has it now, and says what the server made of it. */
export async function recordAtDesk(
  offline: Offline,
  job: string,
  draft: Draft,
  by: string,
): Promise<Outcome> {
  for (const bring of [
    () => pullWorkshop(offline),
    () => pullJobList(offline),
    () => makeAvailableOffline(offline, job),
    () => offline.sync.now(),
  ]) {
    const brought = await bring();
    if (!brought.ok) return brought;
  }
  await offline.jobs.refresh(job);
  const made = await recordEntries(offline, job, [draft], { by });
  if (!made.ok) return { ...made, why: [made.why, made.unlock].filter(Boolean).join(' ') };
  const sent = await offline.sync.now();
  const view = await offline.jobs.refresh(job);
  const ids = made.entries.map(({ id }) => id);
  const refused = view.refused.find(({ id }) => ids.includes(id));
  if (refused) return { ok: false, code: refused.code, why: refused.reason };
  const waiting = view.pending.find(({ id }) => ids.includes(id));
  if (!waiting) return { ok: true };
  const why = sent.ok ? (waiting.reason ?? 'The server has not answered yet.') : sent.why;
  return { ok: false, code: 'waiting', why: `It is kept in this browser and not sent yet: ${why}` };
}
