import { QueryClientProvider, useQuery } from '@tanstack/react-query';
import { useMemo, useState } from 'react';
import { DataTable } from '@/components/DataTable';
import { ErrorNote } from '@/components/ErrorNote';
import { SelectField } from '@/components/SelectField';
import { Verdict } from '@/components/Verdict';
import { dateAndTime } from '@/domain/time-words';
import { workshopLines, type WorkshopTopic } from '@/domain/workshop-words';
import { newQueryClient } from '@/offline/use-server';
import { readWorkshopTrail, type ReadWorkshopTrail } from './read-workshop-trail';

/** What changed about people, tablets, tools, documents and jobs; followed link by link by this browser. */
export function WorkshopTrailPage({ zone }: { zone: string }) {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <WorkshopTrail zone={zone} />
    </QueryClientProvider>
  );
}

function WorkshopTrail({ zone }: { zone: string }) {
  const { data: trail, error } = useQuery<ReadWorkshopTrail>({
    queryKey: ['workshop trail'],
    queryFn: readWorkshopTrail,
    refetchInterval: false,
  });
  const [topic, setTopic] = useState('');
  return (
    <>
      <div className="page-head">
        <h1 className="page-title">The workshop’s trail</h1>
        {trail && <Chain trail={trail} />}
      </div>
      <p className="page-words">
        Whatever jobs are judged by is written here as it changes: people and roles, tablets and keys, tools
        and calibrations, documents, jobs opened, heads signed. Nothing in it can be changed or left out
        afterwards without breaking the chain.
      </p>
      {error && (
        <ErrorNote happened={error.message} kept="The trail is as it was." next="Load the page again." />
      )}
      <div className="max-w-80 pb-4">
        <SelectField
          label="Show"
          value={topic}
          onChange={(event) => setTopic(event.target.value)}
          emptyLabel="Everything"
          options={TOPICS}
        />
      </div>
      <Lines trail={trail} topic={topic} zone={zone} />
    </>
  );
}

const TOPICS: { value: WorkshopTopic; label: string }[] = [
  { value: 'people', label: 'People and PINs' },
  { value: 'tablets', label: 'Tablets and keys' },
  { value: 'tools', label: 'Tools and calibrations' },
  { value: 'documents', label: 'Documents' },
  { value: 'jobs', label: 'Jobs, exports, erasures' },
  { value: 'record', label: 'Heads, settings, restores' },
];

function Chain({ trail: { entries, broken } }: { trail: ReadWorkshopTrail }) {
  return broken ? (
    <Verdict kind="outside" word={`Broken at entry ${broken.seq}`} size="small">
      {broken.why}
    </Verdict>
  ) : (
    <Verdict kind="inside" word={`Unbroken from entry 1 to ${entries.length}`} size="small" />
  );
}

function Lines({
  trail,
  topic,
  zone,
}: {
  trail: ReadWorkshopTrail | undefined;
  topic: string;
  zone: string;
}) {
  const lines = useMemo(() => (trail ? workshopLines(trail.entries).reverse() : []), [trail]);
  const shown = topic === '' ? lines : lines.filter((line) => line.topic === topic);
  return (
    <DataTable
      caption="Entries of the workshop’s trail, the newest first"
      columns={[
        { key: 'seq', label: 'no.', isFigure: true },
        { key: 'at', label: 'when' },
        { key: 'who', label: 'who' },
        { key: 'what', label: 'what', isWide: true },
        { key: 'hash', label: 'hash', isSoft: true },
      ]}
      rows={shown.map(({ seq, at, who, words }) => ({
        key: String(seq),
        cells: {
          seq,
          at: (
            <time dateTime={at} className="cell-time">
              {dateAndTime(at, zone)}
            </time>
          ),
          who,
          what: words,
          hash: <span className="figure">{trail?.hashes[seq - 1]?.slice(0, 8)}</span>,
        },
      }))}
      emptyWords={trail ? 'Nothing of this sort yet.' : 'Reading the trail'}
    />
  );
}
