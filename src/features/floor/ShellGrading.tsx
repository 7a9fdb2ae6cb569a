import { useState, type ReactNode } from 'react';
import { QuietButton } from '@/components/QuietButton';
import { ShellPicker } from '@/components/WearMap';
import { WearPalette } from '@/components/WearPalette';
import type { ShellPlace } from '@/domain/job-wear';
import { WEAR_FLAGS, WEAR_GRADES, WEAR_SIGNS } from '@/domain/wear';
import { gradeName } from '@/domain/wear-words';
import { benchOf, type Brush, fillOthers, type Grading, touched, ungraded } from './shell-grading';

export interface ShellGradingProps {
  places: readonly ShellPlace[];
  grading: Grading;
  onChange: (grading: Grading) => void;
  /** What to do first. */
  first: string;
  /** Sets palette and bench where the screen has room for them. */
  children: (palette: ReactNode, bench: ReactNode) => ReactNode;
}

/** Grades by a brush: one touch takes a grade or a sign, the next ones give it to shells. */
export function ShellGrading({ places, grading, onChange, first, children }: ShellGradingProps) {
  const [brush, setBrush] = useState<Brush>();
  const open = ungraded(places, grading);
  const canFill = typeof brush === 'number' && open.length > 0;
  const palette = (
    <WearPalette
      grades={WEAR_GRADES}
      signs={WEAR_FLAGS.map((sign) => ({ sign, ...WEAR_SIGNS[sign] }))}
      brush={brush}
      onGrade={setBrush}
      onSign={setBrush}
    />
  );
  const bench = (
    <>
      <div className="wear-hint">
        <p>{brush === undefined ? first : hintFor(brush)}</p>
        {canFill && (
          <QuietButton
            shape="wide"
            label={`${open.length === places.length ? 'All' : 'The other'} ${open.length}: ${gradeName(brush)}`}
            onPress={() => onChange(fillOthers(places, grading, brush))}
          />
        )}
      </div>
      <ShellPicker
        label="The old shells, front at the left, uppers over lowers"
        rods={benchOf(places, grading)}
        onTouch={(name) => brush !== undefined && onChange(touched(grading, name, brush))}
      />
    </>
  );
  return children(palette, bench);
}

function hintFor(brush: Brush): string {
  if (typeof brush === 'number') return `Touch the shells that are “${gradeName(brush)}”.`;
  const { name, looks } = WEAR_SIGNS[brush];
  return `Touch the shells with ${name}: ${looks}. A second touch takes it off.`;
}
