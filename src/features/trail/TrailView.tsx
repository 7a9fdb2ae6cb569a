import { useCallback, useDeferredValue, useMemo, useState } from 'react';
import { TrailStrip } from '@/components/TrailStrip';
import { dayOf } from '@/domain/time-words';
import { HeadCode } from './HeadCode';
import { JobAsItStood } from './JobAsItStood';
import { Ledger } from './Ledger';
import { VerificationNote } from './VerificationNote';
import type { ReadTrail } from './read-trail';
import { relatedTo } from './related';
import { statesAlong } from './states-along';
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
  const signatures = useMemo(
    () =>
      lines
        .filter(({ isSignature }) => isSignature)
        .map(({ seq, what, who }) => ({ at: seq, words: `${who}: ${what}` })),
    [lines],
  );
  const stateAt = useMemo(() => statesAlong(trail), [trail]);
  const walk = useCallback(
    (entries: number) => setPosition((from) => Math.min(total, Math.max(1, from + entries))),
    [total],
  );
  // The strip follows the finger at once; ledger and engine come after it.
  const shown = useDeferredValue(position);
  const entry = trail.entries[shown - 1];
  const related = useMemo(() => relatedTo(trail, shown, zone), [trail, shown, zone]);
  const at = trail.entries[position - 1]?.recorded.at;
  return (
    <div className="trail-page">
      <header className="trail-head">
        <h1 className="trail-title">
          <span className="figure">
            entry {position} of {total}
          </span>
          {at !== undefined && (
            <span className="trail-when">
              {dayOf(at, zone)}, <span className="figure">{lines[position - 1]?.tabletClock}</span>
            </span>
          )}
        </h1>
        <VerificationNote job={job} trail={trail} zone={zone} />
      </header>
      <TrailStrip
        total={total}
        position={position}
        phases={phases}
        signatures={signatures}
        onScrub={setPosition}
      />
      <div className="trail-both">
        <Ledger lines={lines} position={shown} onPick={setPosition} onWalk={walk} />
        {entry && (
          <JobAsItStood
            state={stateAt(shown)}
            entry={entry}
            zone={zone}
            related={related}
            onGo={setPosition}
          />
        )}
      </div>
      <div className="print-only">
        <HeadCode trail={trail} zone={zone} />
      </div>
    </div>
  );
}
