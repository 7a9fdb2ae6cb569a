import { useState, type ChangeEvent } from 'react';
import { DataTable } from '@/components/DataTable';
import { ErrorNote } from '@/components/ErrorNote';
import { FormRow } from '@/components/FormRow';
import { Notice } from '@/components/Notice';
import { dayAndTime } from '@/domain/time-words';
import { offlineOfThisPage } from '@/offline/offline';
import { deliverTabletFile, type Delivery, type FileVerdict } from './deliver-tablet-file';
import { readTabletFile } from './read-tablet-file';

/** Takes in what a tablet saved as a file, and says of each record what became of it. */
export function BringInFile({ zone }: { zone: string }) {
  const [progress, setProgress] = useState<string>();
  const [wrong, setWrong] = useState<string>();
  const [delivery, setDelivery] = useState<Delivery>();
  async function bringIn(picked: File) {
    setWrong(undefined);
    setDelivery(undefined);
    setProgress('Reading the file');
    const read = readTabletFile(await picked.text());
    if (read.ok) setDelivery(await deliverTabletFile(offlineOfThisPage(), read.file, setProgress));
    else setWrong(read.why);
    setProgress(undefined);
  }
  function pick(event: ChangeEvent<HTMLInputElement>) {
    const [picked] = event.target.files ?? [];
    // So that the same file can be picked again.
    event.target.value = '';
    if (picked !== undefined && progress === undefined) void bringIn(picked);
  }
  return (
    <section className="part">
      <h2 className="part-title">Bring in a tablet’s file</h2>
      <p className="page-words">
        A tablet that can’t send saves what it holds under “Where the records are” on the Floor. Its records
        are judged here as if it had sent them: their authors’ signatures prove them. Your name stands in the
        workshop’s trail beside it. The same file again does no harm.
      </p>
      <FormRow label="The file of the tablet" hint="witnessmark-tablet-….json, with its photographs inside">
        {(links) => (
          <input
            {...links}
            type="file"
            accept=".json,application/json"
            className="form-input"
            onChange={pick}
          />
        )}
      </FormRow>
      <div role="status">{progress !== undefined && <p>{progress}…</p>}</div>
      {wrong !== undefined && (
        <ErrorNote
          happened={wrong}
          kept="Nothing was taken in, and the file is as it was."
          next="Pick the file that the tablet saved, or save it there once more."
        />
      )}
      {delivery && <Delivered delivery={delivery} zone={zone} />}
    </section>
  );
}

function Delivered({ delivery, zone }: { delivery: Delivery; zone: string }) {
  const { tablet, verdicts, notTaken, trouble } = delivery;
  const isWaiting = verdicts.some(({ verdict }) => verdict === 'waiting');
  return (
    <>
      <div className="form">
        {trouble !== undefined && (
          <ErrorNote
            happened={trouble}
            kept="What is listed below is in. The rest is in the file still."
            next="Bring the same file in again."
          />
        )}
        <Notice
          tone={trouble !== undefined || notTaken.length > 0 || isWaiting ? 'unsure' : 'good'}
          title={`${tablet ?? 'The file'}: ${summaryOf(delivery)}`}
          isAlert
        >
          {isWaiting && <p>What waits is in the file alone: keep it, and bring it in again later.</p>}
          {notTaken.map((words) => (
            <p key={words}>{words}</p>
          ))}
        </Notice>
      </div>
      <DataTable
        caption="What became of each record"
        columns={[
          { key: 'job', label: 'job' },
          { key: 'at', label: 'made' },
          { key: 'by', label: 'by' },
          { key: 'words', label: 'record', isWide: true },
          { key: 'verdict', label: 'what became of it', isWide: true },
        ]}
        rows={verdicts.map((row, index) => ({
          key: `${index} ${row.id}`,
          cells: {
            job: <span className="figure">{row.job ?? ''}</span>,
            at: row.at === undefined ? '' : dayAndTime(row.at, zone),
            by: row.by ?? '',
            words: row.words,
            verdict: verdictWords(row),
          },
        }))}
        emptyWords="The file held no records."
      />
    </>
  );
}

const NAMES: Record<FileVerdict['verdict'], string> = {
  recorded: 'recorded',
  'already recorded': 'there already',
  refused: 'refused',
  waiting: 'waiting',
};

function summaryOf({ verdicts, photographs }: Delivery): string {
  const parts = Object.entries(NAMES).flatMap(([verdict, name]) => {
    const count = verdicts.filter((row) => row.verdict === verdict).length;
    return count === 0 ? [] : [`${count} ${name}`];
  });
  if (photographs > 0) parts.push(`${photographs} photograph${photographs === 1 ? '' : 's'} kept`);
  return parts.length === 0 ? 'nothing was in it' : parts.join(', ');
}

function verdictWords({ verdict, reason = '' }: FileVerdict): string {
  switch (verdict) {
    case 'recorded':
      return reason === '' ? 'Recorded.' : `Recorded, with a conflict. ${reason}`;
    case 'already recorded':
      return 'Was there already.';
    case 'refused':
      return `Refused, and kept aside whole. ${reason}`;
    case 'waiting':
      return `Waits. ${reason}`;
  }
}
