/** One printed band of a plastic gauge card. */
export interface CardBandChoice {
  /** What `onPick` is told, such as its position on the card. */
  id: string;
  /** Width of the band in mm, for its true proportion. */
  widthMm: number;
  /** The clearance printed beside it, as text. */
  clearance: string;
}

export interface BandPickerProps {
  /** What to do, as "Touch the band you read on the card". */
  label: string;
  bands: CardBandChoice[];
  picked?: string | undefined;
  onPick: (id: string) => void;
  /** The thread was crushed wider than the widest band. */
  onWider?: (() => void) | undefined;
  onNarrower?: (() => void) | undefined;
  isDisabled?: boolean | undefined;
}

const DRAWN_PX = 108;

/** The bands of the card at their true proportions: touch the one that matches the crushed thread. */
export function BandPicker({
  label,
  bands,
  picked,
  onPick,
  onWider,
  onNarrower,
  isDisabled = false,
}: BandPickerProps) {
  const widest = Math.max(...bands.map(({ widthMm }) => widthMm));
  return (
    <fieldset className="bands" disabled={isDisabled}>
      <legend>{label}</legend>
      <div className="bands-grid">
        {bands.map(({ id, widthMm, clearance }) => (
          <button
            key={id}
            type="button"
            className="band"
            aria-pressed={id === picked}
            onClick={() => onPick(id)}
          >
            <svg viewBox={`0 0 ${DRAWN_PX} 26`} aria-hidden="true">
              <rect
                x={(DRAWN_PX - (widthMm / widest) * DRAWN_PX) / 2}
                y="0"
                width={(widthMm / widest) * DRAWN_PX}
                height="26"
              />
            </svg>
            <span className="figure">{clearance}</span>
          </button>
        ))}
        {onWider !== undefined && (
          <button type="button" className="band is-words" onClick={onWider}>
            wider
          </button>
        )}
        {onNarrower !== undefined && (
          <button type="button" className="band is-words" onClick={onNarrower}>
            narrower
          </button>
        )}
      </div>
    </fieldset>
  );
}
