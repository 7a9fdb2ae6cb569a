import { Sign, type SignName } from './Sign';

/** How far one pass of one cycle is. */
export type PassState = 'done' | 'now' | 'waiting' | 'over' | 'short' | 'left out';

export interface ProgrammeStripProps {
  /** Cycles in order, each with its passes in order. */
  cycles: { name: string; passes: { label: string; state: PassState }[] }[];
  /** What it is a programme of, for a screen reader. */
  label: string;
}

const SIGNS: Record<PassState, SignName | null> = {
  done: 'tick',
  now: 'dot',
  waiting: null,
  over: 'cross',
  short: 'minus',
  'left out': 'minus',
};

/** The tightening programme as a strip: cycles side by side, passes below each other, the present one heavy. */
export function ProgrammeStrip({ cycles, label }: ProgrammeStripProps) {
  return (
    <div className="programme" role="group" aria-label={label}>
      {cycles.map((cycle) => (
        <div key={cycle.name} className="programme-cycle">
          <p className="programme-name">{cycle.name}</p>
          <ol>
            {cycle.passes.map((pass, i) => (
              <PassRow key={`${i}-${pass.label}`} {...pass} />
            ))}
          </ol>
        </div>
      ))}
    </div>
  );
}

function PassRow({ label, state }: { label: string; state: PassState }) {
  const sign = SIGNS[state];
  return (
    <li className="programme-pass" data-state={state} aria-current={state === 'now' ? 'step' : undefined}>
      <span className="figure">{label}</span>
      {sign !== null && <Sign name={sign} />}
      <span className="unseen">, {state}</span>
    </li>
  );
}
