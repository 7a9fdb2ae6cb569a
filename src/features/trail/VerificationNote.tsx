import { useEffect, useState } from 'react';
import { Verdict } from '@/components/Verdict';
import { verifyTrail, type TrailVerdict } from '@/domain/trail';
import { HeadCode } from './HeadCode';
import { browserChecks, canCheckHere } from './browser-checks';
import type { ReadTrail } from './read-trail';

export interface VerificationNoteProps {
  job: string;
  trail: ReadTrail;
  zone: string;
}

type Outcome = TrailVerdict | 'checking' | 'not here';

/** What this very browser found when it checked the trail, entry by entry, and how to do it elsewhere. */
export function VerificationNote({ job, trail, zone }: VerificationNoteProps) {
  const [outcome, setOutcome] = useState<Outcome>('checking');
  useEffect(() => {
    let isGone = false;
    void checkHere(trail).then((found) => {
      if (!isGone) setOutcome(found);
    });
    return () => {
      isGone = true;
    };
  }, [trail]);
  return (
    <div className="trail-verdict" role="status">
      <Found outcome={outcome} total={trail.entries.length} />
      <div className="trail-verdict-more">
        <MoreFound outcome={outcome} />
        <details className="trail-yourself">
          <summary>Check it yourself</summary>
          <p>
            <a href={`/api/jobs/${job}/export`} download>
              Save the trail as a file
            </a>
            , and check it on a machine of your own: <code>npm run verify-trail -- FILE</code>. Compare the
            key with the one that the workshop gave you, and the newest hash with a head that left the
            workshop earlier; without them the check can&rsquo;t tell a whole trail from one that was made
            anew.
          </p>
          {typeof outcome === 'object' && outcome.ok && (
            <>
              <p>
                Workshop&rsquo;s key: <code>{outcome.key}</code>
              </p>
              {outcome.notes.map((note) => (
                <p key={note}>{note}</p>
              ))}
            </>
          )}
          <HeadCode trail={trail} zone={zone} />
        </details>
      </div>
    </div>
  );
}

async function checkHere(trail: ReadTrail): Promise<Outcome> {
  if (!(await canCheckHere(crypto.subtle))) return 'not here';
  return verifyTrail(trail.bytes, browserChecks(crypto.subtle));
}

function Found({ outcome, total }: { outcome: Outcome; total: number }) {
  if (outcome === 'checking') return <p>This browser is checking {total} entries</p>;
  if (outcome === 'not here')
    return <p>This browser can&rsquo;t check the workshop&rsquo;s signatures. Check it elsewhere.</p>;
  if (!outcome.ok) {
    const where = 'brokenAt' in outcome ? `Broken at ${outcome.brokenAt}` : 'Not a trail';
    return (
      <Verdict kind="outside" word={where} size="small">
        {outcome.why}
      </Verdict>
    );
  }
  const { entries, heads } = outcome;
  return (
    <Verdict kind="inside" word={`Unbroken from entry 1 to ${entries} · ${headWords(heads)}`} size="small" />
  );
}

function MoreFound({ outcome }: { outcome: Outcome }) {
  if (typeof outcome !== 'object' || !outcome.ok) return null;
  return (
    <p className="trail-verdict-note">
      {outcome.signatures} authors&rsquo; signatures hold. Checked just now by this browser, entry by entry.
    </p>
  );
}

/** Heads are signed as hold points are, so that a trail can't be cut back behind one unseen. */
function headWords(heads: number): string {
  if (heads === 0) return 'no head is signed yet';
  return `signed ${heads === 1 ? 'once' : `${heads} times`} by the workshop’s key`;
}
