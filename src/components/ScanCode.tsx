import { create } from 'qrcode';

export interface ScanCodeProps {
  /** What a scanner reads. */
  text: string;
  /** What it is, for whoever can't scan it. */
  label: string;
}

/** Dots of quiet around a code (ISO/IEC 18004 asks for four). */
const QUIET = 4;

/** A QR code as one path: sharp in print, black on white in both themes. */
export function ScanCode({ text, label }: ScanCodeProps) {
  const { modules } = create(text, { errorCorrectionLevel: 'M' });
  const { size, data } = modules;
  const whole = size + 2 * QUIET;
  const dots = [...data].flatMap((isDark, at) =>
    isDark ? [`M${(at % size) + QUIET} ${Math.floor(at / size) + QUIET}h1v1h-1z`] : [],
  );
  return (
    <svg className="scan-code" viewBox={`0 0 ${whole} ${whole}`} role="img" aria-label={label}>
      <rect width={whole} height={whole} fill="#ffffff" />
      <path d={dots.join('')} fill="#000000" />
    </svg>
  );
}
