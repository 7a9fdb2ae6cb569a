import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { Keypad } from '@/components/Keypad';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { StepOf } from '@/domain/plan';
import type { ShellsInStock } from '@/domain/shell-choice';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';

interface ShelfCountProps {
  step: StepOf<'choose-shells'>;
  /** As it was counted before, less what was taken. */
  known: ShellsInStock[] | undefined;
  onCounted: (stock: ShellsInStock[]) => void;
  /** Nobody counts now: the grades are proposed as if enough of each lay there. */
  onSkip: () => void;
}

/** How many half shells of each grade lie on the shelf, on number keys. */
export function ShelfCount({ step, known, onCounted, onSkip }: ShelfCountProps) {
  const grades = useRun().state.plan.engine.shells.grades.map(({ grade }) => grade);
  const [counts, setCounts] = useState<Record<string, string>>(() => countsOf(known));
  const [inHand, setInHand] = useState(grades[0] ?? '');
  const missing = grades.find((grade) => grade !== inHand && (counts[grade] ?? '') === '');
  const isTyped = (counts[inHand] ?? '') !== '';
  function goOn(): void {
    if (missing !== undefined) setInHand(missing);
    else onCounted(grades.map((grade) => ({ grade, half: 'either', count: Number(counts[grade]) })));
  }
  return (
    <StepFrame
      step={step}
      side={null}
      then={null}
      isResult
      heading={<h1 className="floor-step pb-4">Count the half shells on the shelf</h1>}
      quiet={<QuietButton label="Not counted" onPress={onSkip} />}
      main={
        <MainAction
          label={missing === undefined ? 'Use these counts' : `Next: ${missing}`}
          why={isTyped ? undefined : `how many of ${inHand}?`}
          onPress={goOn}
        />
      }
    >
      <div className="grid gap-8 sm:grid-cols-2">
        <div className="grid content-start gap-4">
          <ChoiceRows
            label="Grade"
            choices={grades.map((grade) => ({ value: grade, label: grade, note: countWords(counts[grade]) }))}
            value={inHand}
            onChoose={setInHand}
          />
          <p className="text-lg text-soft">New ones, without those in the rods.</p>
        </div>
        <Keypad
          label={`Half shells, ${inHand}`}
          unit=""
          kind="integer"
          maxLength={2}
          value={counts[inHand] ?? ''}
          onChange={(count) => setCounts({ ...counts, [inHand]: count })}
        />
      </div>
    </StepFrame>
  );
}

function countsOf(known: ShellsInStock[] | undefined): Record<string, string> {
  const counts = new Map<string, number>();
  for (const { grade, count } of known ?? []) counts.set(grade, (counts.get(grade) ?? 0) + count);
  return Object.fromEntries([...counts].map(([grade, count]) => [grade, String(count)]));
}

function countWords(count: string | undefined): string {
  return count === undefined || count === '' ? 'not counted yet' : `${count} on the shelf`;
}
