import { useState } from 'react';
import { Button } from '@/components/Button';
import { SignatureStamp } from '@/components/SignatureStamp';
import type { JobState } from '@/domain/job-state';
import { holdPointOf, signatureView } from '@/domain/signature-view';
import { clockTime, dateAndTime, dayOf } from '@/domain/time-words';
import { JudgementDialog, type Judge } from './JudgementDialog';

interface JobSignaturesProps {
  state: JobState;
  zone: string;
  /** Who looks, if they may revoke. */
  judge?: Judge | undefined;
}

interface Revoked {
  of: string;
  title: string;
  words: string;
}

/** The hold points that were signed, as ink on the card, and what became of deviations; who may, revokes. */
export function JobSignatures({ state, zone, judge }: JobSignaturesProps) {
  const [revoking, revoke] = useState<Revoked>();
  const disposed = state.deviations.flatMap((deviation) =>
    deviation.disposed ? [{ ...deviation, disposed: deviation.disposed }] : [],
  );
  const isOver = state.phase === 'handed over' || state.phase === 'ended unfinished';
  const may = judge !== undefined && !isOver;
  if (state.signatures.length === 0 && disposed.length === 0) return null;
  return (
    <section className="part">
      <h2 className="part-title">Signed</h2>
      <div className="job-stamps">
        {state.signatures.map((signature) => (
          <div key={signature.entry}>
            <h3 className="form-label pb-2 first-letter:uppercase">
              {holdPointOf(state.plan, signature.step)}
            </h3>
            {/* The day has its year, because the card outlives it. */}
            <SignatureStamp
              {...signatureView(signature, zone)}
              time={`${dayOf(signature.at, zone)}, ${clockTime(signature.at, zone)}`}
            />
            {may && signature.reopened === undefined && (
              <div className="form-actions mt-2 no-print">
                <Button
                  look="quiet"
                  onClick={() =>
                    revoke({
                      of: signature.entry,
                      title: 'Revoke the signature',
                      words: `${signature.name} signed “${holdPointOf(state.plan, signature.step)}”. The hold point opens again; what was done past it stays recorded as such.`,
                    })
                  }
                >
                  Revoke
                </Button>
              </div>
            )}
          </div>
        ))}
      </div>
      {disposed.length > 0 && (
        <>
          <h3 className="form-label mt-4">Deviations disposed of</h3>
          <ul className="job-list">
            {disposed.map(({ id, words, disposed: { entry, disposition, reason, name, at } }) => (
              <li key={id}>
                <b>{words}</b>: {disposition}, {reason}{' '}
                <span className="text-soft">
                  {name}, {dateAndTime(at, zone)}
                </span>
                {may && (
                  <div className="form-actions mt-2 no-print">
                    <Button
                      look="quiet"
                      onClick={() =>
                        revoke({
                          of: entry,
                          title: 'Revoke the disposition',
                          words: `${words}: ${disposition}, by ${name}. The deviation opens again, and with it a hold point over it.`,
                        })
                      }
                    >
                      Revoke
                    </Button>
                  </div>
                )}
              </li>
            ))}
          </ul>
        </>
      )}
      {revoking && judge && (
        <JudgementDialog
          title={revoking.title}
          judge={judge}
          act="Revoke it"
          look="stop"
          ask="reason"
          draft={(reason) => ({ kind: 'revoked', data: { of: revoking.of, reason } })}
          onClose={() => revoke(undefined)}
        >
          <p>{revoking.words}</p>
        </JudgementDialog>
      )}
    </section>
  );
}
