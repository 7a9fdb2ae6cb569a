import { type ReactNode, useId } from 'react';
import { type FaceGrade, type FaceMark, ShellFace } from './ShellFace';

export interface WearPaletteProps {
  grades: readonly { grade: FaceGrade; name: string; looks: string }[];
  signs: readonly { sign: FaceMark; name: string; looks: string }[];
  /** What the next touch of a shell gives it. */
  brush?: FaceGrade | FaceMark | undefined;
  onGrade: (grade: FaceGrade) => void;
  onSign: (sign: FaceMark) => void;
}

/** Reference patches to compare the shells with: the one that is touched is the brush. */
export function WearPalette({ grades, signs, brush, onGrade, onSign }: WearPaletteProps) {
  return (
    <div className="wear-palette">
      <div role="group" aria-label="Grades" className="wear-grades">
        {grades.map(({ grade, name, looks }) => (
          <Patch
            key={grade}
            label={`${grade} ${name}`}
            looks={looks}
            face={<ShellFace grade={grade} />}
            isPressed={brush === grade}
            onPress={() => onGrade(grade)}
          />
        ))}
      </div>
      <div role="group" aria-label="Signs beside the grade" className="wear-signs">
        {signs.map(({ sign, name, looks }) => (
          <Patch
            key={sign}
            label={name}
            looks={looks}
            isLooksUnseen
            face={<ShellFace grade={0} marks={[sign]} />}
            isPressed={brush === sign}
            onPress={() => onSign(sign)}
          />
        ))}
      </div>
    </div>
  );
}

interface PatchProps {
  label: string;
  looks: string;
  isLooksUnseen?: boolean | undefined;
  face: ReactNode;
  isPressed: boolean;
  onPress: () => void;
}

function Patch({ label, looks, isLooksUnseen = false, face, isPressed, onPress }: PatchProps) {
  const id = useId();
  return (
    <button
      type="button"
      className="wear-patch"
      aria-labelledby={`${id}-label`}
      aria-describedby={`${id}-looks`}
      aria-pressed={isPressed}
      onClick={onPress}
    >
      {face}
      <span className="wear-patch-words">
        <span className="wear-patch-label" id={`${id}-label`}>
          {label}
        </span>
        <span className={isLooksUnseen ? 'unseen' : 'wear-patch-looks'} id={`${id}-looks`}>
          {looks}
        </span>
      </span>
    </button>
  );
}
