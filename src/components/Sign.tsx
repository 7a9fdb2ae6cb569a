/** The signs that stand beside words; none of them stands alone. */
export type SignName =
  'tick' | 'cross' | 'question' | 'dot' | 'ring' | 'arrow' | 'back' | 'erase' | 'lock' | 'plus' | 'minus';

const PATHS: Record<SignName, string> = {
  tick: 'M 4 13 L 9.5 19 L 20 5',
  cross: 'M 5 5 L 19 19 M 19 5 L 5 19',
  question: 'M 7.5 8.5 A 4.6 4.6 0 1 1 13.8 12.6 C 12.5 13.3 12 14 12 15.5 M 12 19.4 L 12 19.6',
  dot: '',
  ring: '',
  arrow: 'M 4 12 L 20 12 M 13 5 L 20 12 L 13 19',
  back: 'M 20 12 L 4 12 M 11 5 L 4 12 L 11 19',
  erase: 'M 8 5 L 21 5 L 21 19 L 8 19 L 2 12 Z M 11 9 L 17 15 M 17 9 L 11 15',
  lock: 'M 6 11 L 18 11 L 18 20 L 6 20 Z M 8.5 11 L 8.5 8 A 3.5 3.5 0 0 1 15.5 8 L 15.5 11',
  plus: 'M 12 4 L 12 20 M 4 12 L 20 12',
  minus: 'M 4 12 L 20 12',
};

/** A plain drawn sign the height of the text beside it, silent for a screen reader. */
export function Sign({ name, className }: { name: SignName; className?: string | undefined }) {
  return (
    <svg
      className={className === undefined ? 'sign' : `sign ${className}`}
      viewBox="0 0 24 24"
      aria-hidden="true"
    >
      {name === 'dot' ? <circle className="sign-fill" cx="12" cy="12" r="8" /> : null}
      {name === 'ring' ? <circle cx="12" cy="12" r="7.5" /> : null}
      {PATHS[name] === '' ? null : <path d={PATHS[name]} />}
    </svg>
  );
}
