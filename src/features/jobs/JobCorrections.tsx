import { useState } from 'react';
import { Button } from '@/components/Button';
import type { Entry, EntryData } from '@/domain/entry';
import { wordsOf } from '@/domain/entry-words';
import { DONE_PAST, findSignature } from '@/domain/job-evidence';
import { findKept } from '@/domain/job';
import type { JobState, Kept } from '@/domain/job-state';
import { findStep } from '@/domain/plan';
import { dayAndTime } from '@/domain/time-words';
import { JudgementDialog, type Judge } from './JudgementDialog';
import { holdPointName } from './hold-point-name';

interface JobCorrectionsProps {
  state: JobState;
  zone: string;
  /** Who looks, if they may countersign. */
  judge?: Judge | undefined;
}

/** What corrections ask for: a countersign, a hold point signed again, and which steps were done past it. */
export function JobCorrections({ state, zone, judge }: JobCorrectionsProps) {
  const [asked, ask] = useState<string>();
  const due = state.countersigns.filter(({ countersignedBy }) => countersignedBy === undefined);
  const past = state.signatures.filter(({ donePast = [] }) => donePast.length > 0);
  const one = due.find(({ correction }) => correction === asked);
  if (due.length === 0 && past.length === 0) return null;
  return (
    <section className="part">
      <h2 className="part-title">Corrected under a signature</h2>
      <ul className="job-list">
        {due.map((countersign) => (
          <li key={countersign.correction}>
            <b>Countersign due before handover</b>
            <Correction state={state} zone={zone} correction={countersign.correction} />
            {judge && countersign.by !== judge.id && (
              <div className="form-actions mt-2">
                <Button look="quiet" onClick={() => ask(countersign.correction)}>
                  Countersign
                </Button>
              </div>
            )}
          </li>
        ))}
        {past.map(({ entry, step, donePast = [] }) => (
          <li key={entry}>
            <b>
              {donePast.length === 1 ? '1 step was' : `${donePast.length} steps were`} {DONE_PAST}:{' '}
              {holdPointName(findStep(state.plan, step)?.title ?? step)}
            </b>{' '}
            <span className="text-soft">
              {findSignature(state, step) ? 'signed again since' : 'not signed again yet'}
            </span>
            <p>{donePast.map((id) => findStep(state.plan, id)?.title ?? id).join('; ')}</p>
          </li>
        ))}
      </ul>
      {one && judge && (
        <JudgementDialog
          title="Countersign the correction"
          judge={judge}
          act="Countersign"
          look="main"
          ask="pin"
          draft={(pin) => ({
            kind: 'countersigned',
            data: { of: one.correction, name: judge.name },
            pin,
          })}
          onClose={() => ask(undefined)}
        >
          <Correction state={state} zone={zone} correction={one.correction} />
        </JudgementDialog>
      )}
    </section>
  );
}

/** What a correction changed, by whom, when and why. */
function Correction({ state, zone, correction }: { state: JobState; zone: string; correction: string }) {
  const kept = findKept(state, correction);
  if (!kept) return null;
  const { of, reason } = kept.data as EntryData<'corrected'>;
  const target = findKept(state, of);
  return (
    <p>
      {target && <>Now: {keptWords(state, target)}. </>}
      <span className="text-soft">
        Corrected by {kept.name}, {dayAndTime(kept.at, zone)}: {reason}
        {target && target.by !== kept.by ? `; recorded by ${target.name}` : ''}
      </span>
    </p>
  );
}

function keptWords(state: JobState, { kind, step, data }: Kept): string {
  // Words are made of these three alone.
  return wordsOf({ kind, step, data } as Entry, state.plan);
}
