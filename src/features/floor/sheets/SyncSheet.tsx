import { useState } from 'react';
import { LookPanel } from '@/components/LookPanel';
import { QuietButton } from '@/components/QuietButton';
import { Sign } from '@/components/Sign';
import { WipeCover } from '@/components/WipeCover';
import { wordsOf } from '@/domain/entry-words';
import { findStep, type PlanStep } from '@/domain/plan';
import { dayAndTime } from '@/domain/time-words';
import type { OutboxRow, RefusedRow } from '@/offline/database';
import type { Surroundings } from '@/offline/surroundings';
import { signInAgainWords, type SyncStatus } from '@/offline/sync-status';
import { capWords, isCapBegun } from '../cap-in-hand';
import { afterRefusal } from '../refused-words';
import { useRun, type Run } from '../run-context';
import { SaveToFile } from './SaveToFile';
import { Sheet } from './Sheet';
import { WaitingRecords } from './WaitingRecords';

const WIPE_SECONDS = 10;

interface SyncSheetProps {
  /** The step on the screen. */
  step: PlanStep | undefined;
  status: SyncStatus;
  /** What the server has not given back of the job. */
  pending?: readonly OutboxRow[] | undefined;
  /** The tablet's records, to save them as a file. */
  offline?: Surroundings | undefined;
  hasUpdate: boolean;
  onUpdate: () => void;
  onClose: () => void;
}

/** Where the records are, what was refused and why, and how this tablet looks. */
export function SyncSheet({
  step,
  status,
  pending = [],
  offline,
  hasUpdate,
  onUpdate,
  onClose,
}: SyncSheetProps) {
  const run = useRun();
  const [wipedUntil, setWipedUntil] = useState<number>();
  const mustSignIn = signInAgainWords(status.signInAgain);
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
      <div className="grid items-start gap-x-10 gap-y-4 @4xl/sheet:grid-cols-[2fr_3fr]">
        <div className="grid gap-3">
          <section className="grid gap-2 text-lg">
            <div className="grid gap-2" role="status">
              <p className="text-2xl font-bold">{status.words}</p>
              <p>
                <span className="figure">{status.sent}</span> made on this tablet are with the server.
                {status.lastSyncAt !== undefined &&
                  ` Last sent ${dayAndTime(status.lastSyncAt, run.workshop.zone)}.`}
              </p>
              {status.trouble && <p className="font-bold">{status.trouble.words}</p>}
              {mustSignIn !== undefined && <p className="font-bold">{mustSignIn}</p>}
            </div>
            <p className="text-soft">
              What is on this tablet is safe through a reload, an empty battery and a shift without a network.
            </p>
            <div className="flex flex-wrap gap-3 pt-2">
              <QuietButton shape="wide" label="Send now" onPress={() => void run.syncNow()} />
              {hasUpdate && (
                <QuietButton
                  shape="wide"
                  label="Use the new version"
                  why={whyNotUpdate(run, step)}
                  onPress={onUpdate}
                />
              )}
              <QuietButton
                shape="wide"
                label="Wipe the screen"
                onPress={() => setWipedUntil(run.now() + WIPE_SECONDS * 1000)}
              />
            </div>
          </section>
          {offline && <SaveToFile offline={offline} />}
          <WaitingRecords pending={pending} plan={run.state.plan} zone={run.workshop.zone} />
          <Refused refused={run.refused} onClose={onClose} />
        </div>
        <section className="grid gap-3">
          <h3 className="form-label border-b-2 border-text pb-1">How this tablet looks</h3>
          <LookPanel />
        </section>
      </div>
    </Sheet>
  );
}

/** A new version comes between two actions only. */
function whyNotUpdate({ isBusy, state }: Run, step: PlanStep | undefined): string | undefined {
  if (isBusy) return 'something is being recorded';
  return isCapBegun(state, step) ? `${capWords(step)} stand half tightened: finish them first` : undefined;
}

/** What the server refused: that of whoever works here first, with what to do about it. */
function Refused({ refused, onClose }: { refused: RefusedRow[]; onClose: () => void }) {
  const { person } = useRun();
  const own = refused.filter(({ entry }) => entry.by === person.id);
  const others = refused.filter(({ entry }) => entry.by !== person.id);
  return (
    <>
      <RefusedRows title={`Refused, yours: ${own.length}`} rows={own} onClose={onClose} />
      <RefusedRows title={`Refused, of others: ${others.length}`} rows={others} onClose={onClose} />
    </>
  );
}

interface RefusedRowsProps {
  title: string;
  rows: RefusedRow[];
  onClose: () => void;
}

function RefusedRows({ title, rows, onClose }: RefusedRowsProps) {
  const run = useRun();
  const { plan } = run.state;
  if (rows.length === 0) return null;
  return (
    <section>
      <h3 className="form-label border-b-2 border-text pb-1">{title}</h3>
      <ul className="grid gap-3 pt-3 text-lg">
        {rows.map((row) => {
          const { id, entry, reason } = row;
          const step = entry.step === undefined ? undefined : findStep(plan, entry.step);
          return (
            <li key={id} className="grid gap-1 border-b border-rule pb-3">
              <p className="flex items-start gap-2 font-bold">
                <Sign name="cross" className="text-outside" />
                {wordsOf(entry, plan)}
              </p>
              <p className="text-base text-soft">
                {entry.author.name}, {dayAndTime(entry.at, run.workshop.zone)}; kept here
              </p>
              <p>{reason}</p>
              <p className="font-bold">{afterRefusal(row)}</p>
              {step && (
                <div className="pt-1">
                  <QuietButton
                    shape="wide"
                    label={`Go to “${step.title}”`}
                    onPress={() => {
                      run.goTo(step.id);
                      onClose();
                    }}
                  />
                </div>
              )}
            </li>
          );
        })}
      </ul>
    </section>
  );
}
