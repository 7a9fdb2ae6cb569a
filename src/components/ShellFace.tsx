/** How far the face of a shell is worn, from even grey (0) to material missing (4). */
export type FaceGrade = 0 | 1 | 2 | 3 | 4;

/** What else may be drawn on a face. */
export type FaceMark = 'heat' | 'debris' | 'edge' | 'pitting';

export interface ShellFaceProps {
  /** None while the shell was not graded: its outline alone. */
  grade?: FaceGrade | undefined;
  marks?: readonly FaceMark[] | undefined;
}

interface Ellipse {
  cx: number;
  cy: number;
  rx: number;
  ry: number;
}

const WORN: Ellipse = { cx: 50, cy: 24, rx: 31, ry: 15 };
const COPPER: Ellipse = { cx: 52, cy: 24, rx: 21, ry: 11 };

/** The straight pieces of lines at 45° inside an ellipse, one every `gap`, rising or falling. */
function hatching({ cx, cy, rx, ry }: Ellipse, gap: number, rise: 1 | -1): string {
  const reach = Math.hypot(rx, ry);
  const pieces: string[] = [];
  for (let offset = -Math.floor(reach / gap) * gap; offset <= reach; offset += gap) {
    // y = rise · x + offset in the ellipse's own axes
    const a = 1 / rx ** 2 + 1 / ry ** 2;
    const b = (2 * rise * offset) / ry ** 2;
    const root = b ** 2 - 4 * a * (offset ** 2 / ry ** 2 - 1);
    if (root <= 0) continue;
    const [from, to] = [-1, 1].map((side) => (-b + side * Math.sqrt(root)) / (2 * a)) as [number, number];
    const point = (x: number) => `${(cx + x).toFixed(1)} ${(cy + rise * x + offset).toFixed(1)}`;
    pieces.push(`M ${point(from)} L ${point(to)}`);
  }
  return pieces.join(' ');
}

const CROSS_HATCH = `${hatching(COPPER, 5, 1)} ${hatching(COPPER, 5, -1)}`;
const LINES = 'M 12 10 H 84 M 20 15 H 88 M 9 20 H 70 M 24 25 H 87 M 10 30 H 78 M 16 35 H 88 M 12 39.5 H 66';
const FEW_LINES = 'M 10 9 H 40 M 58 9 H 88 M 8 39.5 H 34 M 62 39.5 H 86';
const CRATERS = [
  'M 36 17 L 44 13 L 51 16 L 50 23 L 42 26 L 35 23 Z',
  'M 57 21 L 67 18 L 73 24 L 68 31 L 59 30 L 55 26 Z',
  'M 43 30 L 49 29 L 51 34 L 46 36 L 42 34 Z',
];

/** The face of a shell laid flat, its parting lines left and right: told by lines and hatching, never by colour alone. */
export function ShellFace({ grade, marks = [] }: ShellFaceProps) {
  return (
    <svg
      className="shell-face"
      viewBox="0 0 96 52"
      aria-hidden="true"
      data-open={grade === undefined || undefined}
      data-empty={(grade === undefined && marks.length === 0) || undefined}
    >
      <path className="shell-tab" d="M 12 45 V 50 H 24 V 45" />
      <rect className="shell-body" x="3" y="3" width="90" height="42" rx="2.5" />
      {grade !== undefined && <Wear grade={grade} />}
      {marks.map((mark) => (
        <Mark key={mark} mark={mark} />
      ))}
    </svg>
  );
}

function Wear({ grade }: { grade: FaceGrade }) {
  if (grade === 0) return null;
  if (grade === 1) return <path className="shell-lines" d={LINES} />;
  return (
    <>
      <path className="shell-lines" d={FEW_LINES} />
      <ellipse className="shell-worn" {...WORN} />
      {grade === 3 && (
        <>
          <path className="shell-lines" d={CROSS_HATCH} />
          <ellipse className="shell-edge" {...COPPER} />
        </>
      )}
      {grade === 4 && CRATERS.map((crater) => <path key={crater} className="shell-hole" d={crater} />)}
    </>
  );
}

function Mark({ mark }: { mark: FaceMark }) {
  switch (mark) {
    case 'heat':
      return <path className="shell-heat" d="M 3 5 L 13 10 V 38 L 3 43 Z M 93 5 L 83 10 V 38 L 93 43 Z" />;
    case 'debris':
      return (
        <>
          <path className="shell-scores" d="M 22 13 H 46 M 53 29 H 81 M 64 15 H 84" />
          <path
            className="shell-hole"
            d="M 16 13 l 6 -5.5 l 6 5.5 l -6 5.5 Z M 47 29 l 6 -5.5 l 6 5.5 l -6 5.5 Z M 58 15 l 5 -4.5 l 5 4.5 l -5 4.5 Z"
          />
        </>
      );
    case 'edge':
      return (
        <>
          <rect className="shell-worn" x="3" y="36" width="90" height="9" />
          <path
            className="shell-lines"
            d="M 6 45 l 8 -9 M 16 45 l 8 -9 M 26 45 l 8 -9 M 36 45 l 8 -9 M 46 45 l 8 -9 M 56 45 l 8 -9 M 66 45 l 8 -9 M 76 45 l 8 -9"
          />
        </>
      );
    case 'pitting':
      return PITS.map(([cx, cy]) => (
        <circle key={`${cx} ${cy}`} className="shell-pit" cx={cx} cy={cy} r="2.4" />
      ));
  }
}

const PITS = [
  [20, 22],
  [27, 30],
  [34, 9],
  [44, 9],
  [70, 38],
  [78, 30],
  [80, 16],
  [72, 10],
] as const;
