import { Sign } from '@/components/Sign';
import { wordsOf } from '@/domain/entry-words';
import type { Plan } from '@/domain/plan';
import { dayAndTime } from '@/domain/time-words';
import type { OutboxRow } from '@/offline/database';
import { afterWaiting } from '../waiting-words';

const SHOWN = 8;

interface WaitingRecordsProps {
  /** What the server has not given back yet. */
  pending: readonly OutboxRow[];
  plan: Plan;
  zone: string;
}

/** Records that the server has seen and can't judge yet, each with what it waits for. */
export function WaitingRecords({ pending, plan, zone }: WaitingRecordsProps) {
  const waiting = pending.filter(({ where }) => where === 'waiting');
  // Those behind the first one wait for nothing but their turn.
  const causes = waiting.filter(({ code }) => code !== 'earlier-missing');
  const told = causes.length > 0 ? causes : waiting.slice(0, 1);
  const behind = waiting.length - told.length;
  if (waiting.length === 0) return null;
  return (
    <section>
      <h3 className="form-label border-b-2 border-text pb-1">Waiting at the server: {waiting.length}</h3>
      <ul className="grid gap-3 pt-3 text-lg">
        {told.slice(0, SHOWN).map((row) => (
          <li key={row.id} className="grid gap-1 border-b border-rule pb-3">
            <p className="flex items-start gap-2 font-bold">
              <Sign name="lock" />
              {wordsOf(row.entry, plan)}
            </p>
            <p className="text-base text-soft">
              {row.entry.author.name}, {dayAndTime(row.entry.at, zone)}; safe on this tablet
            </p>
            <p>{row.reason ?? 'The server has not said why.'}</p>
            <p className="font-bold">{afterWaiting(row)}</p>
          </li>
        ))}
      </ul>
      {behind > 0 && (
        <p className="pt-3 text-lg">
          {behind === 1 ? 'One more waits' : `${behind} more wait`} only for{' '}
          {causes.length === 0 ? 'that' : 'these'}.
        </p>
      )}
    </section>
  );
}
