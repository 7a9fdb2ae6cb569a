import { EngineBelow } from '@/components/EngineBelow';
import { SignatureStamp } from '@/components/SignatureStamp';
import type { Recorded } from '@/domain/entry';
import { engineView } from '@/domain/engine-view';
import type { JobState, Signature } from '@/domain/job-state';
import { findStep } from '@/domain/plan';
import { dayAndTime } from '@/domain/time-words';

export interface JobAsItStoodProps {
  state: JobState;
  seq: number;
  /** The entry looked at. */
  recorded: Recorded | undefined;
  zone: string;
}

/** What the record said of the engine, the open things and the signatures once this entry was in it. */
export function JobAsItStood({ state, seq, recorded, zone }: JobAsItStoodProps) {
  const step = recorded?.step === undefined ? undefined : findStep(state.plan, recorded.step);
  const open = state.deviations.filter(({ disposed }) => !disposed);
  return (
    <section className="trail-state" aria-label={`The job as it stood at entry ${seq}`}>
      <h2 className="trail-state-title">The job as it stood at entry {seq}</h2>
      <div className="trail-state-both">
        <EngineBelow {...engineView(state, step, zone)} />
        <div className="trail-state-words">
          {state.signatures.map((signature) => (
            <Stamp key={signature.entry} signature={signature} zone={zone} />
          ))}
          {recorded?.kind === 'signed' && (
            <Independence state={state} by={recorded.by} step={recorded.step} />
          )}
          <OpenThings
            title="Open deviations"
            things={open.map(({ id, words }) => ({ key: id, words }))}
            none="No deviation open."
          />
          <OpenThings
            title="Taken off or put in, still open"
            things={state.open.map(({ item, name, count }) => ({
              key: item,
              words: count === undefined ? name : `${name}, ${count}`,
            }))}
            none="Nothing open."
          />
        </div>
      </div>
    </section>
  );
}

function Stamp({ signature, zone }: { signature: Signature; zone: string }) {
  const { name, at, meaning, covered, checkedAt, reopened, notIndependent, count } = signature;
  const state =
    reopened === undefined
      ? checkedAt === undefined
        ? 'to be checked'
        : 'signed'
      : reopened.startsWith('revoked')
        ? 'revoked'
        : 'open again';
  return (
    <SignatureStamp
      state={state}
      name={name}
      time={dayAndTime(at, zone)}
      words={count === undefined ? meaning : meaning.replaceAll('{count}', String(count))}
      covers={`${covered} entries`}
      isNotIndependent={notIndependent !== undefined}
    />
  );
}

/** Says of a signer what the record knows: whether they had a hand in the work. */
function Independence({ state, by, step }: { state: JobState; by: string; step: string | undefined }) {
  const hold = step === undefined ? undefined : findStep(state.plan, step);
  if (hold?.kind !== 'hold') return null;
  const isAuthor = hold.covers.some((id) => state.authors[id]?.includes(by));
  return (
    <p>{isAuthor ? 'The signer had a hand in this work.' : 'The signer did no work in what this covers.'}</p>
  );
}

function OpenThings({
  title,
  things,
  none,
}: {
  title: string;
  things: { key: string; words: string }[];
  none: string;
}) {
  return (
    <div>
      <h3 className="form-label">{title}</h3>
      {things.length === 0 ? (
        <p>{none}</p>
      ) : (
        <ul className="trail-open">
          {things.map(({ key, words }) => (
            <li key={key}>{words}</li>
          ))}
        </ul>
      )}
    </div>
  );
}
