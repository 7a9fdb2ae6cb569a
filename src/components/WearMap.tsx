import { type FaceGrade, type FaceMark, ShellFace } from './ShellFace';

/** One old shell as the map shows it. */
export interface WearMapShell {
  /** What is written on its back, as "3U". */
  name: string;
  /** None while it was not graded. */
  grade?: FaceGrade | undefined;
  marks: readonly FaceMark[];
  /** What is seen on it, as "fine lines, heat". */
  words: string;
}

/** The two shells of one rod; one that is not known is left out. */
export interface WearMapRod {
  rod: string;
  upper?: WearMapShell | undefined;
  lower?: WearMapShell | undefined;
}

/** More of them stand in a second row of the bench, so that none becomes too narrow for a finger. */
const MOST_IN_A_ROW = 8;

const HALVES = [
  { half: 'upper', word: 'Upper' },
  { half: 'lower', word: 'Lower' },
] as const;

/** Splits the rods into rows of the bench that are about as long. */
export function benchRows(rods: readonly WearMapRod[]): WearMapRod[][] {
  const rows = Math.ceil(rods.length / MOST_IN_A_ROW);
  const length = Math.ceil(rods.length / Math.max(1, rows));
  return Array.from({ length: rows }, (_, row) => rods.slice(row * length, (row + 1) * length));
}

export interface WearMapProps {
  /** What it shows, as "Wear of the old shells". */
  label: string;
  rods: readonly WearMapRod[];
  /** Small: what is seen on a shell is said to a screen reader only. */
  size?: 'small' | 'full' | undefined;
}

/** The old shells as they lie on the bench, front at the left and uppers over lowers, each with its face. */
export function WearMap({ label, rods, size = 'full' }: WearMapProps) {
  return benchRows(rods).map((row, index) => (
    <table key={row[0]?.rod} className="wear-map" data-size={size}>
      <caption className="unseen">
        {label}
        {index > 0 ? ', further rods' : ''}, front at the left
      </caption>
      <colgroup>
        <col className="wear-halves" />
        <col span={row.length} />
      </colgroup>
      <thead className="unseen">
        <tr>
          <th scope="col">Half</th>
          {row.map(({ rod }) => (
            <th key={rod} scope="col">
              Rod {rod}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {HALVES.map(({ half, word }) => (
          <tr key={half}>
            <th scope="row" className="wear-half">
              <span className={size === 'small' ? 'unseen' : undefined}>{word}</span>
            </th>
            {row.map(({ rod, [half]: shell }) => (
              <td key={rod}>{shell && <ShellCell shell={shell} isSmall={size === 'small'} />}</td>
            ))}
          </tr>
        ))}
      </tbody>
    </table>
  ));
}

function ShellCell({ shell, isSmall }: { shell: WearMapShell; isSmall: boolean }) {
  const { name, grade, marks, words } = shell;
  return (
    <div className="shell-cell">
      <span className="shell-name">
        {name}
        <span className="unseen">, </span>
      </span>
      <ShellFace grade={grade} marks={marks} />
      <span className={isSmall ? 'unseen' : 'shell-words'}>{words}</span>
    </div>
  );
}

export interface ShellPickerProps {
  label: string;
  rods: readonly WearMapRod[];
  onTouch: (shell: string) => void;
}

/** The same bench with every shell a target. */
export function ShellPicker({ label, rods, onTouch }: ShellPickerProps) {
  return (
    <div role="group" aria-label={label} className="shell-bench">
      {benchRows(rods).map((row) => (
        <div key={row[0]?.rod} className="shell-rows">
          {HALVES.map(({ half }) => (
            <div key={half} className="shell-row">
              {row.map(({ rod, [half]: shell }) =>
                shell === undefined ? (
                  <span key={rod} />
                ) : (
                  <button
                    key={rod}
                    type="button"
                    className="shell-cell is-touchable"
                    data-open={shell.grade === undefined || undefined}
                    aria-label={`${shell.name}, ${shell.words}`}
                    onClick={() => onTouch(shell.name)}
                  >
                    <span className="shell-name">{shell.name}</span>
                    <ShellFace grade={shell.grade} marks={shell.marks} />
                    <span className="shell-words">{shell.words}</span>
                  </button>
                ),
              )}
            </div>
          ))}
        </div>
      ))}
    </div>
  );
}
