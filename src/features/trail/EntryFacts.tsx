import { Field } from '@/components/Field';
import type { Recorded } from '@/domain/entry';

export interface EntryFactsProps {
  recorded: Recorded;
  hash: string;
}

/** What the record holds of one entry beside its words: enough to find it again in the saved file. */
export function EntryFacts({ recorded, hash }: EntryFactsProps) {
  const { seq, device, deviceSeq, basis, clockOffsetMs } = recorded;
  return (
    <dl className="trail-facts">
      <Field label={`Hash of entry ${seq}`}>
        <code className="trail-hash">{hash}</code>
      </Field>
      <Field label="Made on">
        {device === 'server' ? (
          'the server'
        ) : (
          <>
            tablet <code className="trail-hash">{device}</code>, its number{' '}
            <span className="figure">{deviceSeq}</span> in this job
          </>
        )}
      </Field>
      <Field label="The tablet knew">
        {basis === 0 ? 'no entry before it' : `entries 1 to ${basis}`}
        {clockWords(clockOffsetMs)}
      </Field>
    </dl>
  );
}

function clockWords(offsetMs: number): string {
  const seconds = Math.round(Math.abs(offsetMs) / 1000);
  if (seconds < 2) return '; its clock was right';
  const far = seconds < 120 ? `${seconds} s` : `${Math.round(seconds / 60)} min`;
  return `; its clock was ${far} ${offsetMs > 0 ? 'ahead' : 'behind'}`;
}
