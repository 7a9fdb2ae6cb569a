import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { ErrorNote } from '@/components/ErrorNote';
import { dayAndTime } from '@/domain/time-words';
import { useServerList } from '@/offline/use-server';

const text = z.optional(z.string());

const setAsideAnswer = z.object({
  setAside: z.array(
    z.object({
      id: z.string(),
      words: z.string(),
      reason: z.string(),
      at: z.string(),
      madeAt: text,
      by: text,
      tablet: text,
    }),
  ),
  cursor: text,
});
type SetAside = z.infer<typeof setAsideAnswer>['setAside'][number];

/** What was refused in the job and is kept: what it says, by whom, from which tablet, and why it was set aside. */
export function JobSetAside({ job, zone }: { job: string; zone: string }) {
  const list = useServerList(`/api/jobs/${job}/set-aside`, setAsideAnswer);
  const all = list.data?.pages.flatMap(({ setAside }) => setAside) ?? [];
  if (all.length === 0 && !list.error) return null;
  return (
    <section className="part">
      <h2 className="part-title">Set aside</h2>
      {list.error && (
        <ErrorNote
          happened={list.error.message}
          kept="What was set aside is kept."
          next="The list is asked for again by itself."
        />
      )}
      <p className="text-soft">
        Refused, kept whole, and not part of the work done. If it did happen, record it again.
      </p>
      <ul className="job-list">
        {all.map((one) => (
          <li key={one.id}>
            <Line one={one} zone={zone} />
          </li>
        ))}
      </ul>
      {list.hasNextPage && (
        <Button look="quiet" onClick={() => void list.fetchNextPage()} isBusy={list.isFetchingNextPage}>
          Older ones
        </Button>
      )}
    </section>
  );
}

function Line({ one: { words, reason, at, madeAt, by, tablet }, zone }: { one: SetAside; zone: string }) {
  const made = [
    by ?? 'nobody that the workshop knows',
    ...(madeAt === undefined ? [] : [dayAndTime(madeAt, zone)]),
    tablet === undefined ? 'from a tablet that is not proved' : `on ${tablet}`,
  ];
  return (
    <>
      <b>{words}</b>
      <p>{reason}</p>
      <p className="text-soft">
        {made.join(', ')}; set aside {dayAndTime(at, zone)}
      </p>
    </>
  );
}
