import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { DataTable } from '@/components/DataTable';
import { dayAndTime } from '@/domain/time-words';
import { useServerList } from '@/offline/use-server';

const devicesAnswer = z.object({
  devices: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      state: z.string(),
      enrolledAt: z.string(),
      lastHeardAt: z.nullable(z.string()),
    }),
  ),
  cursor: z.optional(z.string()),
});

/** The tablets and desk browsers that the workshop knows, and when each was last heard. */
export function Tablets({ zone }: { zone: string }) {
  const list = useServerList('/api/devices', devicesAnswer);
  const devices = list.data?.pages.flatMap((page) => page.devices);
  return (
    <section className="part">
      <h2 className="part-title">Tablets</h2>
      <DataTable
        caption="The tablets of the workshop"
        columns={[
          { key: 'name', label: 'tablet', isWide: true },
          { key: 'id', label: 'id', isSoft: true },
          { key: 'enrolled', label: 'enrolled' },
          { key: 'heard', label: 'last heard' },
          { key: 'state', label: 'state' },
        ]}
        rows={(devices ?? []).map(({ id, name, state, enrolledAt, lastHeardAt }) => ({
          key: id,
          isSoft: state === 'lost',
          cells: {
            name,
            id: <span className="figure">{id.slice(-8)}</span>,
            enrolled: dayAndTime(enrolledAt, zone),
            heard: lastHeardAt === null ? 'never' : dayAndTime(lastHeardAt, zone),
            state,
          },
        }))}
        emptyWords={devices ? 'No tablet is enrolled.' : 'Reading the tablets'}
      />
      {list.hasNextPage && (
        <Button look="quiet" onClick={() => void list.fetchNextPage()} isBusy={list.isFetchingNextPage}>
          Older tablets
        </Button>
      )}
    </section>
  );
}
