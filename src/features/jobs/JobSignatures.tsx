import { SignatureStamp } from '@/components/SignatureStamp';
import type { JobState } from '@/domain/job-state';
import { dayAndTime } from '@/domain/time-words';

/** The hold points that were signed, as ink on the card. */
export function JobSignatures({ state, zone }: { state: JobState; zone: string }) {
  if (state.signatures.length === 0) return null;
  return (
    <section className="part">
      <h2 className="part-title">Signed</h2>
      <div className="job-stamps">
        {state.signatures.map(
          ({ entry, name, at, meaning, count, covered, checkedAt, reopened, notIndependent }) => (
            <SignatureStamp
              key={entry}
              state={
                reopened === undefined ? (checkedAt === undefined ? 'to be checked' : 'signed') : 'open again'
              }
              name={name}
              time={dayAndTime(at, zone)}
              words={count === undefined ? meaning : meaning.replaceAll('{count}', String(count))}
              covers={`${covered} entries`}
              isNotIndependent={notIndependent !== undefined}
            />
          ),
        )}
      </div>
    </section>
  );
}
