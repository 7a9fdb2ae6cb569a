import type { ReactNode } from 'react';
import { EdgeFlash } from './EdgeFlash';

/** One ruled cell of the bar at the top; with `onPress` it is a target. */
export interface FloorCell {
  label: string;
  note?: string | undefined;
  onPress?: (() => void) | undefined;
  /** What pressing does, for a screen reader, as "change who is working". */
  does?: string | undefined;
}

export interface FloorFrameProps {
  job: FloorCell;
  phase: FloorCell;
  sync: FloorCell;
  person: FloorCell;
  /** The drawing, always in the same place; without it the main area takes the width. */
  side?: ReactNode;
  children: ReactNode;
  /** Two quiet buttons at most. */
  quiet?: ReactNode;
  /** The main action. */
  main?: ReactNode;
  /** A line over everything while it lasts, such as a caution or an update that waits. */
  notice?: ReactNode;
  /** Counts what was recorded: each change flashes the edge of the screen. */
  flash?: number | undefined;
}

/** The frame of every Floor screen: who and what at the top, the drawing at the side, one action at the bottom. */
export function FloorFrame({
  job,
  phase,
  sync,
  person,
  side,
  children,
  quiet,
  main,
  notice,
  flash = 0,
}: FloorFrameProps) {
  const cells = { job, phase, sync, person };
  return (
    <div className="floor" data-side={side === undefined ? undefined : 'yes'}>
      <header className="floor-top">
        {Object.entries(cells).map(([place, cell]) => (
          <TopCell key={place} place={place} {...cell} />
        ))}
      </header>
      {notice !== undefined && <div className="floor-notice">{notice}</div>}
      <div className="floor-middle">
        {side !== undefined && (
          <aside className="floor-side" aria-label="Beside the step">
            {side}
          </aside>
        )}
        <main className="floor-main">{children}</main>
      </div>
      {(quiet !== undefined || main !== undefined) && (
        <footer className="floor-bottom">
          {quiet !== undefined && <div className="floor-quiet">{quiet}</div>}
          {main}
        </footer>
      )}
      <EdgeFlash count={flash} />
    </div>
  );
}

function TopCell({ place, label, note, onPress, does }: FloorCell & { place: string }) {
  const words = (
    <>
      <span className="floor-cell-label">{label} </span>
      {note !== undefined && <span className="floor-cell-note">{note}</span>}
    </>
  );
  return (
    <div className="floor-cell" data-place={place} role={place === 'sync' ? 'status' : undefined}>
      {onPress === undefined ? (
        <div className="floor-cell-words">{words}</div>
      ) : (
        <button type="button" className="floor-cell-words is-touchable" onClick={onPress}>
          {words}
          {does !== undefined && <span className="unseen">, {does}</span>}
        </button>
      )}
    </div>
  );
}
