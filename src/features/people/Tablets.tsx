import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { DataTable } from '@/components/DataTable';
import { ErrorNote } from '@/components/ErrorNote';
import { dateAndTime } from '@/domain/time-words';
import { offlineOfThisPage } from '@/offline/offline';
import { callServer } from '@/offline/server-call';
import { useServerList } from '@/offline/use-server';
import { LostTabletDialog } from './LostTabletDialog';

const device = z.object({
  id: z.string(),
  name: z.string(),
  state: z.string(),
  enrolledAt: z.string(),
  lastHeardAt: z.nullable(z.string()),
});

const devicesAnswer = z.object({ devices: z.array(device), cursor: z.optional(z.string()) });

type DeviceRow = z.infer<typeof device>;

const COLUMNS = [
  { key: 'name', label: 'tablet', isWide: true },
  { key: 'id', label: 'id', isSoft: true },
  { key: 'enrolled', label: 'enrolled' },
  { key: 'heard', label: 'last heard' },
  { key: 'state', label: 'state' },
  { key: 'acts', label: 'change', align: 'right' },
] as const;

/** The tablets and desk browsers that the workshop knows, when each was last heard, and which are lost. */
export function Tablets({ zone, title = 'Tablets' }: { zone: string; title?: string | undefined }) {
  const list = useServerList('/api/devices', devicesAnswer);
  const devices = list.data?.pages.flatMap((page) => page.devices);
  const [losing, setLosing] = useState<DeviceRow>();
  const { change, trouble, forget } = useTabletChange();
  const declare = async (tablet: DeviceRow, reason: string) => {
    if (await change(tablet.id, { state: 'lost', reason })) setLosing(undefined);
  };
  return (
    <section className="part">
      <h2 className="part-title">{title}</h2>
      {trouble !== undefined && losing === undefined && (
        <ErrorNote happened={trouble} kept="The tablet is as it was." next="Try it again." />
      )}
      <DataTable
        caption="The tablets of the workshop"
        columns={[...COLUMNS]}
        rows={(devices ?? []).map((row) => ({
          key: row.id,
          isSoft: row.state === 'lost',
          cells: {
            name: row.name,
            id: <span className="figure">{row.id.slice(-8)}</span>,
            enrolled: dateAndTime(row.enrolledAt, zone),
            heard: heardWords(row, zone),
            state: row.state === 'lost' ? 'lost: nothing it sends is taken' : 'in use',
            acts: (
              <TabletActs
                row={row}
                onLose={() => {
                  forget();
                  setLosing(row);
                }}
                onFound={() => void change(row.id, { state: 'active' })}
              />
            ),
          },
        }))}
        emptyWords={devices ? 'No tablet is enrolled.' : 'Reading the tablets'}
      />
      {list.hasNextPage && (
        <Button look="quiet" onClick={() => void list.fetchNextPage()} isBusy={list.isFetchingNextPage}>
          Older tablets
        </Button>
      )}
      {losing && (
        <LostTabletDialog
          name={losing.name}
          about={`${losing.name}, id ${losing.id.slice(-8)}, last heard ${heardWords(losing, zone)}`}
          trouble={trouble}
          onDeclare={(reason) => void declare(losing, reason)}
          onClose={() => setLosing(undefined)}
        />
      )}
    </section>
  );
}

function heardWords({ lastHeardAt }: DeviceRow, zone: string): string {
  return lastHeardAt === null ? 'never' : dateAndTime(lastHeardAt, zone);
}

function TabletActs({ row, onLose, onFound }: { row: DeviceRow; onLose: () => void; onFound: () => void }) {
  return row.state === 'lost' ? (
    <Button look="link" onClick={onFound} aria-label={`${row.name} is found: take it back into use`}>
      Take back into use
    </Button>
  ) : (
    <Button look="link" onClick={onLose} aria-label={`Declare ${row.name} lost`}>
      Declare lost
    </Button>
  );
}

/** Changes a tablet at the server, and tells in words why it did not come about. */
function useTabletChange() {
  const client = useQueryClient();
  const [trouble, setTrouble] = useState<string>();
  const change = async (
    id: string,
    body: { state: 'active' | 'lost'; reason?: string },
  ): Promise<boolean> => {
    const changed = await callServer(offlineOfThisPage(), {
      method: 'PATCH',
      path: `/api/devices/${id}`,
      body,
      answer: z.looseObject({}),
    });
    setTrouble(changed.ok ? undefined : changed.why);
    await client.invalidateQueries();
    return changed.ok;
  };
  return { change, trouble, forget: () => setTrouble(undefined) };
}
