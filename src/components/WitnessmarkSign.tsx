import { BoltShape } from './BoltShape';

/** The program's own sign: a bolt head with its cycles done and its paint stripe. */
export function WitnessmarkSign({ size = 40 }: { size?: number | undefined }) {
  return (
    <svg
      className="drawing"
      viewBox="0 0 48 56"
      width={`${(size * 48) / 56 / 16}rem`}
      height={`${size / 16}rem`}
      aria-hidden="true"
    >
      <BoltShape centre={{ x: 24, y: 33 }} radius={21} state="marked" cycles={3} cyclesDone={3} isHeavy />
    </svg>
  );
}
