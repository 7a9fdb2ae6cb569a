export interface BladePickerProps {
  /** What to do, as "Touch the thickest blade that passes". */
  label: string;
  /** The blades of the set by thickness, as printed on them. */
  blades: string[];
  unit: string;
  picked?: string | undefined;
  onPick: (blade: string) => void;
}

const DRAWN_PX = 22;
const LENGTH_PX = 108;

/** The blades of a feeler set, drawn at their proportion to each other: touch the thickest that passes. */
export function BladePicker({ label, blades, unit, picked, onPick }: BladePickerProps) {
  const thickest = Math.max(...blades.map(Number));
  return (
    <fieldset className="bands">
      <legend>{label}</legend>
      <div className="bands-grid">
        {blades.map((blade) => {
          const height = Math.max(1.5, (Number(blade) / thickest) * DRAWN_PX);
          return (
            <button
              key={blade}
              type="button"
              className="band"
              aria-label={`${blade} ${unit}`}
              aria-pressed={blade === picked}
              onClick={() => onPick(blade)}
            >
              <svg viewBox={`0 0 ${LENGTH_PX} ${DRAWN_PX}`} aria-hidden="true">
                <rect x="0" y={(DRAWN_PX - height) / 2} width={LENGTH_PX} height={height} rx="1" />
              </svg>
              <span className="figure">{blade}</span>
            </button>
          );
        })}
      </div>
    </fieldset>
  );
}
