import { memo } from 'react';
import { EngineBelow } from '@/components/EngineBelow';
import { SignatureStamp } from '@/components/SignatureStamp';
import { engineView } from '@/domain/engine-view';
import type { JobState } from '@/domain/job-state';
import { findStep } from '@/domain/plan';
import { holdPointOf, signatureView } from '@/domain/signature-view';
import { EntryFacts } from './EntryFacts';
import { RelatedEntries } from './RelatedEntries';
import type { ReadTrail } from './read-trail';
import type { Related } from './related';

export interface JobAsItStoodProps {
  state: JobState;
  /** The entry looked at. */
  entry: ReadTrail['entries'][number];
  zone: string;
  /** What other entries say about it. */
  related: Related[];
  onGo: (seq: number) => void;
}

/** What the record said of the engine, the open things and the signatures once this entry was in it. */
export const JobAsItStood = memo(function JobAsItStood({
  state,
  entry,
  zone,
  related,
  onGo,
}: JobAsItStoodProps) {
  const { recorded, hash } = entry;
  const { seq } = recorded;
  const step = recorded.step === undefined ? undefined : findStep(state.plan, recorded.step);
  const open = state.deviations.filter(({ disposed }) => !disposed);
  return (
    <section
      className="trail-state"
      aria-label={`The job as it stood at entry ${seq}`}
      // eslint-disable-next-line jsx-a11y/no-noninteractive-tabindex -- a box that scrolls must take the keyboard
      tabIndex={0}
    >
      <h2 className="trail-state-title">The job as it stood at entry {seq}</h2>
      <RelatedEntries related={related} onGo={onGo} />
      <div className="trail-state-both">
        <EngineBelow {...engineView(state, step, zone)} />
        <div className="trail-state-words">
          {/* The newest signature is the one that the work stands on: it comes first. */}
          {[...state.signatures].reverse().map((signature, i) => {
            const { words, covers, ...stamp } = signatureView(signature, zone);
            return (
              <div key={signature.entry}>
                <h3 className="form-label pb-1 first-letter:uppercase">
                  {holdPointOf(state.plan, signature.step)}
                </h3>
                <SignatureStamp {...stamp} {...(i === 0 ? { words, covers } : {})} />
              </div>
            );
          })}
          {recorded.kind === 'signed' && <Independence state={state} by={recorded.by} step={recorded.step} />}
          <OpenThings
            title="Open deviations"
            things={open.map(({ words }) => words)}
            none="No deviation open."
          />
          <OpenThings
            title="Taken off or put in, still open"
            things={state.open.map(({ name, count }) => (count === undefined ? name : `${name} (${count})`))}
            none="Nothing open."
          />
          <EntryFacts recorded={recorded} hash={hash} />
        </div>
      </div>
    </section>
  );
});

/** Says of a signer what the record knows: whether they had a hand in the work. */
function Independence({ state, by, step }: { state: JobState; by: string; step: string | undefined }) {
  const hold = step === undefined ? undefined : findStep(state.plan, step);
  if (hold?.kind !== 'hold') return null;
  const isAuthor = hold.covers.some((id) => state.authors[id]?.includes(by));
  return (
    <p>{isAuthor ? 'The signer had a hand in this work.' : 'The signer did no work in what this covers.'}</p>
  );
}

interface OpenThingsProps {
  title: string;
  things: string[];
  none: string;
}

function OpenThings({ title, things, none }: OpenThingsProps) {
  return (
    <div>
      <h3 className="form-label">{title}</h3>
      <p>{things.length === 0 ? none : things.join(', ')}</p>
    </div>
  );
}
