import { useEffect, useRef, type KeyboardEvent } from 'react';
import type { TrailLine } from './trail-lines';

export interface LedgerProps {
  lines: TrailLine[];
  position: number;
  onPick: (seq: number) => void;
}

const STEPS: Record<string, number> = {
  ArrowUp: -1,
  ArrowDown: 1,
  PageUp: -20,
  PageDown: 20,
  Home: -1e9,
  End: 1e9,
};

/** Every entry, a line each, its hash at the end; arrow keys walk it. */
export function Ledger({ lines, position, onPick }: LedgerProps) {
  const box = useRef<HTMLDivElement>(null);
  useEffect(() => {
    const row = box.current?.querySelector('tr[aria-current]');
    row?.scrollIntoView({ block: 'nearest' });
  }, [position]);
  const walk = (event: KeyboardEvent) => {
    const step = STEPS[event.key];
    if (step === undefined) return;
    event.preventDefault();
    onPick(Math.min(lines.length, Math.max(1, position + step)));
  };
  return (
    // The box scrolls, so it takes the keyboard; the lines in it are buttons for the pointer and for touch.
    // eslint-disable-next-line jsx-a11y/no-noninteractive-element-interactions -- arrow keys walk the ledger
    <div
      ref={box}
      className="trail-ledger"
      role="group"
      aria-label="Entries"
      // eslint-disable-next-line jsx-a11y/no-noninteractive-tabindex -- a box that scrolls must take the keyboard
      tabIndex={0}
      onKeyDown={walk}
    >
      <table className="data-table">
        <caption className="unseen">The entries of this job in order</caption>
        <thead>
          <tr>
            <th scope="col">no.</th>
            <th scope="col">tablet clock</th>
            <th scope="col">recorded</th>
            <th scope="col">who</th>
            <th scope="col" data-wide>
              what
            </th>
            <th scope="col">tablet</th>
            <th scope="col">hash</th>
          </tr>
        </thead>
        <tbody>
          {lines.map((line) => (
            <Line key={line.seq} line={line} isCurrent={line.seq === position} onPick={onPick} />
          ))}
        </tbody>
      </table>
    </div>
  );
}

interface LineProps {
  line: TrailLine;
  isCurrent: boolean;
  onPick: (seq: number) => void;
}

function Line({ line, isCurrent, onPick }: LineProps) {
  return (
    <>
      {line.day !== undefined && (
        <tr className="trail-day">
          <th colSpan={7} scope="rowgroup">
            {line.day}
          </th>
        </tr>
      )}
      <tr
        aria-current={isCurrent || undefined}
        className="trail-line"
        data-superseded={line.superseded !== undefined || undefined}
      >
        <td className="figure">
          <button
            type="button"
            className="trail-pick"
            onClick={() => onPick(line.seq)}
            aria-label={`Entry ${line.seq}`}
          >
            {line.seq}
          </button>
        </td>
        <td className="figure">
          {line.tabletClock}
          {line.isClockOff && <span className="trail-flag">clock off</span>}
        </td>
        <td className="figure">{line.recorded}</td>
        <td>
          {line.who}
          {line.withWhom.length > 0 && <span className="trail-with">with {line.withWhom.join(', ')}</span>}
        </td>
        <td data-wide>
          {line.what}
          {line.pinChecked !== undefined && <span className="trail-with">PIN checked {line.pinChecked}</span>}
          {line.superseded !== undefined && <span className="trail-flag">{line.superseded}</span>}
          {line.conflict !== undefined && <span className="trail-flag">conflict: {line.conflict}</span>}
        </td>
        <td className="trail-soft">{line.tablet}</td>
        <td className="figure trail-soft" title={line.hash}>
          {line.hash.slice(0, 4)}…
        </td>
      </tr>
    </>
  );
}
