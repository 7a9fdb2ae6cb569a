/** How far a signature counts. */
export type SignatureState = 'signed' | 'to be checked' | 'revoked' | 'open again';

export interface SignatureStampProps {
  state: SignatureState;
  /** The signer's printed name. */
  name: string;
  /** When, as the reader's clock shows it: "06 Oct 10:58". */
  time: string;
  /** The signer's own words. */
  words?: string | undefined;
  /** What it covers, as "112 entries, 205 to 317". */
  covers?: string | undefined;
  /** The signer had a hand in the work. */
  isNotIndependent?: boolean | undefined;
  /** By which certificate they signed, as "LY-MT-014, master technician". */
  certificate?: string | undefined;
}

const STAMPS: Record<SignatureState, string> = {
  signed: 'SIGNED',
  'to be checked': 'SIGNED, TO BE CHECKED',
  revoked: 'REVOKED',
  'open again': 'OPEN AGAIN',
};

/** A signature as an ink stamp: what it is, printed name, time, and the signer's words beside it. */
export function SignatureStamp({
  state,
  name,
  time,
  words,
  covers,
  isNotIndependent = false,
  certificate,
}: SignatureStampProps) {
  return (
    <figure className="signature" data-state={state.replaceAll(' ', '-')}>
      <div className="signature-stamp">
        <p className="signature-state">{STAMPS[state]}</p>
        <p className="signature-name">{name}</p>
        {certificate !== undefined && <p>{certificate}</p>}
        <p className="figure">{time}</p>
        {isNotIndependent && <p className="signature-state">NOT INDEPENDENT</p>}
      </div>
      {(words !== undefined || covers !== undefined) && (
        <figcaption className="signature-words">
          {words !== undefined && <p>“{words}”</p>}
          {covers !== undefined && <p className="signature-covers">Covers {covers}</p>}
        </figcaption>
      )}
    </figure>
  );
}
