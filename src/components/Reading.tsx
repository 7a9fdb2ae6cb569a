export interface ReadingProps {
  /** What was read, as "Rod 4, rear". */
  label: string;
  /** As read, with its own digits. */
  value: string;
  unit: string;
}

/** A value just read: the largest thing on its screen, with its unit. */
export function Reading({ label, value, unit }: ReadingProps) {
  return (
    <p className="reading">
      <span className="form-label">{label}</span>
      <span className="reading-value">
        {value}
        <span className="reading-unit"> {unit}</span>
      </span>
    </p>
  );
}
