import { memo, useCallback, useEffect, useRef, type KeyboardEvent } from 'react';
import type { TrailLine } from './trail-lines';

export interface LedgerProps {
  lines: TrailLine[];
  position: number;
  onPick: (seq: number) => void;
  /** So many entries on or back; the trail's ends stop it. */
  onWalk: (entries: number) => void;
}

const STEPS: Record<string, number> = {
  ArrowUp: -1,
  ArrowDown: 1,
  PageUp: -20,
  PageDown: 20,
  Home: -1e9,
  End: 1e9,
};

/** Every entry, a line each, its hash at the end; a touch picks one, arrow keys walk them. */
export const Ledger = memo(function Ledger({ lines, position, onPick, onWalk }: LedgerProps) {
  const box = useRef<HTMLDivElement>(null);
  useEffect(() => {
    const row = box.current?.querySelector('tr[aria-current]');
    row?.scrollIntoView({ block: 'nearest' });
    // Whoever walks with the keys keeps the focus on the line that is shown.
    if (box.current?.contains(document.activeElement) === true)
      row?.querySelector('button')?.focus({ preventScroll: true });
  }, [position]);
  const walk = useCallback(
    (event: KeyboardEvent) => {
      const step = STEPS[event.key];
      if (step === undefined || event.altKey || event.ctrlKey || event.metaKey) return;
      event.preventDefault();
      onWalk(step);
    },
    [onWalk],
  );
  return (
    <div ref={box} className="trail-ledger">
      <table className="data-table">
        <caption className="unseen">
          The entries of this job in order. Arrow keys walk from entry to entry.
        </caption>
        <thead>
          <tr>
            <th scope="col" data-align="right">
              no.
            </th>
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
            <Line
              key={line.seq}
              line={line}
              standing={line.seq === position ? 'current' : line.seq < position ? 'past' : 'later'}
              onPick={onPick}
              onKeyDown={walk}
            />
          ))}
        </tbody>
      </table>
    </div>
  );
});

interface LineProps {
  line: TrailLine;
  /** To the entry that is shown. */
  standing: 'past' | 'current' | 'later';
  onPick: (seq: number) => void;
  onKeyDown: (event: KeyboardEvent) => void;
}

const Line = memo(function Line({ line, standing, onPick, onKeyDown }: LineProps) {
  const isCurrent = standing === 'current';
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
        data-later={standing === 'later' || undefined}
      >
        <td data-figure data-align="right">
          <button
            type="button"
            className="trail-pick"
            // One stop for the Tab key; from there the arrow keys walk.
            tabIndex={isCurrent ? 0 : -1}
            onClick={() => onPick(line.seq)}
            onKeyDown={onKeyDown}
            aria-label={`Entry ${line.seq}`}
          >
            {line.seq}
          </button>
        </td>
        <td data-figure>
          {line.tabletClock}
          {line.isClockOff && <span className="trail-flag">clock off</span>}
        </td>
        <td data-figure data-soft>
          {line.recordedDay !== undefined && <span className="trail-recorded-day">{line.recordedDay} </span>}
          {line.recorded}
        </td>
        <td className="trail-who">
          {line.who}
          {line.withWhom.length > 0 && <span className="trail-with">with {line.withWhom.join(', ')}</span>}
        </td>
        <td data-wide>
          <span data-superseded={line.superseded !== undefined || undefined}>{line.what}</span>
          {line.pinChecked !== undefined && <span className="trail-with">PIN checked {line.pinChecked}</span>}
          {line.superseded !== undefined && <span className="trail-flag">{line.superseded}</span>}
          {line.conflict !== undefined && <span className="trail-flag">conflict: {line.conflict}</span>}
        </td>
        <td data-figure data-soft>
          {line.tablet}
        </td>
        <td data-figure data-soft>
          {line.hash.slice(0, 4)}…
        </td>
      </tr>
    </>
  );
});
