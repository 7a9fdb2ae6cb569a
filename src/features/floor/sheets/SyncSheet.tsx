import { useState } from 'react';
import { LookPanel } from '@/components/LookPanel';
import { QuietButton } from '@/components/QuietButton';
import { WipeCover } from '@/components/WipeCover';
import { wordsOf } from '@/domain/entry-words';
import type { RefusedRow } from '@/offline/database';
import type { SyncStatus } from '@/offline/sync-status';
import { useRun } from '../run-context';
import { dayAndTime } from '@/domain/time-words';
import { Sheet } from './Sheet';

const WIPE_SECONDS = 10;

interface SyncSheetProps {
  status: SyncStatus;
  hasUpdate: boolean;
  onUpdate: () => void;
  onClose: () => void;
}

/** Where the records are, what was refused and why, and how this tablet looks. */
export function SyncSheet({ status, hasUpdate, onUpdate, onClose }: SyncSheetProps) {
  const run = useRun();
  const [wipedUntil, setWipedUntil] = useState<number>();
  if (wipedUntil !== undefined) {
    return (
      <WipeCover
        endsAtMs={wipedUntil}
        secondsInAll={WIPE_SECONDS}
        now={run.now}
        onEnd={() => setWipedUntil(undefined)}
      />
    );
  }
  return (
    <Sheet title="Where the records are" onClose={onClose}>
      <div className="grid gap-6">
        <section className="grid gap-2 text-lg" role="status">
          <p className="text-2xl font-bold">{status.words}</p>
          <p>
            <span className="figure">{status.sent}</span> made on this tablet are with the server.
            {status.lastSyncAt !== undefined &&
              ` Last sent ${dayAndTime(status.lastSyncAt, run.workshop.zone)}.`}
          </p>
          {status.trouble && <p className="font-bold">{status.trouble.words}</p>}
          <p className="text-soft">
            What is on this tablet is safe through a reload, an empty battery and a shift without a network.
          </p>
          <div className="flex flex-wrap gap-3 pt-2">
            <QuietButton shape="wide" label="Send now" onPress={() => void run.syncNow()} />
            {hasUpdate && <QuietButton shape="wide" label="Use the new version" onPress={onUpdate} />}
            <QuietButton
              shape="wide"
              label="Wipe the screen"
              onPress={() => setWipedUntil(run.now() + WIPE_SECONDS * 1000)}
            />
          </div>
        </section>
        <Refused refused={run.refused} />
        <section className="grid gap-4">
          <h3 className="form-label border-b-2 border-text pb-1">How this tablet looks</h3>
          <LookPanel />
        </section>
      </div>
    </Sheet>
  );
}

function Refused({ refused }: { refused: RefusedRow[] }) {
  const run = useRun();
  if (refused.length === 0) return null;
  return (
    <section>
      <h3 className="form-label border-b-2 border-text pb-1">Refused by the server, kept here</h3>
      <ul className="grid gap-3 pt-3 text-lg">
        {refused.map(({ id, entry, reason }) => (
          <li key={id} className="border-b border-rule pb-3">
            <p className="font-bold">{wordsOf(entry, run.state.plan)}</p>
            <p>
              {entry.author.name}, {dayAndTime(entry.at, run.workshop.zone)}. {reason}
            </p>
          </li>
        ))}
      </ul>
    </section>
  );
}
