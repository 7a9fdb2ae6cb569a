import { useId } from 'react';
import { pointAt } from './bolt-geometry';

export interface CrankDialProps {
  /** Degrees in the running direction from pin 1 at the bottom. */
  angle: number;
  /** Where the crank is to go next, drawn dotted. */
  targetAngle?: number | undefined;
  /** Diameter in px. */
  size?: number | undefined;
}

/** A small dial with the angle at which the crank stands, and where it goes next. */
export function CrankDial({ angle, targetAngle, size = 44 }: CrankDialProps) {
  const titleId = useId();
  const centre = { x: 24, y: 24 };
  const pin = pointAt(centre, 13, angle);
  const target = targetAngle === undefined ? undefined : pointAt(centre, 13, targetAngle);
  const words = `Crank at ${angle}°${targetAngle === undefined ? '' : `, turn to ${targetAngle}°`}`;
  return (
    <span className="crank-dial">
      <svg
        className="drawing"
        viewBox="0 0 48 48"
        width={`${size / 16}rem`}
        height={`${size / 16}rem`}
        role="img"
        aria-labelledby={titleId}
      >
        <title id={titleId}>{words}</title>
        <circle className="dial-line" cx="24" cy="24" r="20" />
        {[0, 90, 180, 270].map((tick) => {
          const outer = pointAt(centre, 20, tick);
          const inner = pointAt(centre, 16.5, tick);
          return (
            <path key={tick} className="dial-line" d={`M ${outer.x} ${outer.y} L ${inner.x} ${inner.y}`} />
          );
        })}
        {target !== undefined && <circle className="dial-target" cx={target.x} cy={target.y} r="4.5" />}
        <path className="line-text" strokeWidth="2.5" d={`M 24 24 L ${pin.x} ${pin.y}`} />
        <circle className="fill-text" cx={pin.x} cy={pin.y} r="4.5" />
        <circle className="fill-text" cx="24" cy="24" r="2.5" />
      </svg>
      <span className="figure" aria-hidden="true">
        {angle}°
      </span>
    </span>
  );
}
