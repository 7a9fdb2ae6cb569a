import { useDeferredValue, useMemo, useState } from 'react';
import { TrailStrip } from '@/components/TrailStrip';
import { replay } from '@/domain/job';
import { dayOf } from '@/domain/time-words';
import { JobAsItStood } from './JobAsItStood';
import { Ledger } from './Ledger';
import { VerificationNote } from './VerificationNote';
import type { ReadTrail } from './read-trail';
import { linesOf, phasesOf } from './trail-lines';

export interface TrailViewProps {
  job: string;
  trail: ReadTrail;
  zone: string;
}

/** The ledger on the left, the job as it stood on the right, and a strip of the whole job to scrub along. */
export function TrailView({ job, trail, zone }: TrailViewProps) {
  const total = trail.entries.length;
  const [position, setPosition] = useState(total);
  const lines = useMemo(() => linesOf(trail, zone), [trail, zone]);
  const phases = useMemo(() => phasesOf(trail), [trail]);
  const upTo = useDeferredValue(position);
  const state = useMemo(
    () =>
      replay(
        trail.plans,
        trail.entries.map(({ recorded }) => recorded),
        { upTo },
      ),
    [trail, upTo],
  );
  const line = lines[position - 1];
  const at = trail.entries[position - 1]?.recorded.at;
  return (
    <div className="trail-page">
      <header className="trail-head">
        <h1 className="trail-title">
          <span className="figure">
            entry {position} of {total}
          </span>
          <span className="trail-when">
            {at !== undefined && `${dayOf(at, zone)}, ${line?.tabletClock ?? ''}`}
          </span>
        </h1>
        <VerificationNote job={job} trail={trail} />
      </header>
      <TrailStrip
        total={total}
        position={position}
        phases={phases}
        signatures={lines
          .filter(({ isSignature }) => isSignature)
          .map(({ seq, what, who }) => ({ at: seq, words: `${who}: ${what}` }))}
        onScrub={setPosition}
      />
      <div className="trail-both">
        <Ledger lines={lines} position={position} onPick={setPosition} />
        <JobAsItStood state={state} seq={upTo} recorded={trail.entries[upTo - 1]?.recorded} zone={zone} />
      </div>
    </div>
  );
}
