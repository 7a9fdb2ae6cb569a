import { useState } from 'react';
import { Button } from '@/components/Button';
import type { Entry, EntryData } from '@/domain/entry';
import { wordsOf } from '@/domain/entry-words';
import { DONE_PAST, findSignature } from '@/domain/job-evidence';
import { findKept } from '@/domain/job';
import { whyNotCountersignedBy } from '@/domain/job-correction-rules';
import { dueCountersigns } from '@/domain/job-countersign';
import { sentence } from '@/domain/job-order';
import type { Countersign, JobState, Kept } from '@/domain/job-state';
import { findStep } from '@/domain/plan';
import { holdPointOf } from '@/domain/signature-view';
import { dateAndTime } from '@/domain/time-words';
import { JudgementDialog, type Judge } from './JudgementDialog';

interface JobCorrectionsProps {
  state: JobState;
  zone: string;
  /** Who looks, if they may countersign. */
  judge?: Judge | undefined;
}

/** What corrections ask for: a countersign, a hold point signed again, and which steps were done past it. */
export function JobCorrections({ state, zone, judge }: JobCorrectionsProps) {
  const [asked, ask] = useState<string>();
  const due = dueCountersigns(state);
  const past = state.signatures.filter(({ donePast = [] }) => donePast.length > 0);
  const one = due.find(({ correction }) => correction === asked);
  if (due.length === 0 && past.length === 0) return null;
  return (
    <section className="part">
      <h2 className="part-title">Corrected</h2>
      <ul className="job-list">
        {due.map((countersign) => (
          <li key={countersign.correction}>
            <b>{dueWords(countersign)}</b>
            <Correction state={state} zone={zone} asked={countersign} />
            {judge && <Countersigning {...{ state, countersign, judge }} onAsk={ask} />}
          </li>
        ))}
        {past.map(({ entry, step, donePast = [] }) => (
          <li key={entry}>
            <b>
              {donePast.length === 1 ? '1 step was' : `${donePast.length} steps were`} {DONE_PAST}:{' '}
              {holdPointOf(state.plan, step)}
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
          <Correction state={state} zone={zone} asked={one} />
        </JudgementDialog>
      )}
    </section>
  );
}

function dueWords({ deviations }: Countersign): string {
  if (deviations === undefined) return 'Countersign due before handover';
  return deviations.length === 1
    ? 'Countersign due: the deviation stays open until then'
    : 'Countersign due: the deviations stay open until then';
}

/** The button for whoever may, or why this person may not. */
function Countersigning({
  state,
  countersign,
  judge,
  onAsk,
}: {
  state: JobState;
  countersign: Countersign;
  judge: Judge;
  onAsk: (correction: string) => void;
}) {
  const verdict = whyNotCountersignedBy(state, countersign, judge.id);
  if (!verdict.ok) return <p className="text-soft">{[verdict.why, verdict.unlock].join(' ')}</p>;
  return (
    <div className="form-actions mt-2 no-print">
      <Button look="quiet" onClick={() => onAsk(countersign.correction)}>
        Countersign
      </Button>
    </div>
  );
}

/** What a correction changed, by whom, when and why, and which deviations wait for it. */
function Correction({ state, zone, asked }: { state: JobState; zone: string; asked: Countersign }) {
  const kept = findKept(state, asked.correction);
  if (!kept) return null;
  const { of, reason } = kept.data as EntryData<'corrected'>;
  const target = findKept(state, of);
  const earlier = state.deviations.filter(({ id }) => asked.deviations?.includes(id));
  return (
    <div>
      {earlier.map(({ id, words }) => (
        <p key={id}>Before: {sentence(words)}</p>
      ))}
      {target && <p>Now: {sentence(keptWords(state, target))}</p>}
      <p className="text-soft">
        Corrected by {kept.name}, {dateAndTime(kept.at, zone)}: {reason}
        {target && target.by !== kept.by ? `; recorded by ${target.name}` : ''}
      </p>
    </div>
  );
}

function keptWords(state: JobState, { kind, step, data }: Kept): string {
  // Words are made of these three alone.
  return wordsOf({ kind, step, data } as Entry, state.plan);
}
