import { SignatureStamp } from '@/components/SignatureStamp';
import type { JobState } from '@/domain/job-state';
import { signatureView } from '@/domain/signature-view';
import { clockTime, dayOf } from '@/domain/time-words';

/** The hold points that were signed, as ink on the card; their day has its year, because the card outlives it. */
export function JobSignatures({ state, zone }: { state: JobState; zone: string }) {
  if (state.signatures.length === 0) return null;
  return (
    <section className="part">
      <h2 className="part-title">Signed</h2>
      <div className="job-stamps">
        {state.signatures.map((signature) => (
          <SignatureStamp
            key={signature.entry}
            {...signatureView(signature, zone)}
            time={`${dayOf(signature.at, zone)}, ${clockTime(signature.at, zone)}`}
          />
        ))}
      </div>
    </section>
  );
}
