import { useState } from 'react';
import { MainAction } from '@/components/MainAction';
import { correctionClass } from '@/domain/correction-class';
import { oldShells } from '@/domain/job-wear';
import type { Kept } from '@/domain/job-state';
import { dataOf } from '../done-words';
import { NoteField } from '../NoteField';
import { useRun } from '../run-context';
import { gradingOf, shellsOf } from '../shell-grading';
import { ShellGrading } from '../ShellGrading';
import { BeforeAfter } from './BeforeAfter';
import { afterWords } from './correct-words';
import { Sheet } from './Sheet';

const REASONS = ['looked again in better light', 'shells mixed up', 'wrong one touched'];

interface CorrectGradesProps {
  kept: Kept;
  onClose: () => void;
  onBack: () => void;
}

/** The grades of the old shells put right by the same brush that gave them. */
export function CorrectGrades({ kept, onClose, onBack }: CorrectGradesProps) {
  const run = useRun();
  const places = oldShells(run.state.plan);
  const [grading, setGrading] = useState(() => gradingOf(dataOf(kept, 'graded').shells));
  const [reason, setReason] = useState('');
  const shells = shellsOf(places, grading);
  const data = shells && { shells };
  const isClass = data && correctionClass(kept.data, data);
  async function correct() {
    if (data === undefined || isClass === undefined) return;
    const isRecorded = await run.record([
      {
        kind: 'corrected',
        step: kept.step,
        with: [],
        data: { of: kept.id, class: isClass, reason: reason.trim(), data },
      },
    ]);
    if (isRecorded) onClose();
  }
  return (
    <Sheet
      title="Correct the grades"
      onClose={onBack}
      foot={
        <MainAction
          label="Correct it"
          next={isClass && afterWords(run.state, kept, isClass)}
          why={
            isClass === undefined
              ? 'that is what stands there'
              : reason.trim() === ''
                ? 'give the reason'
                : undefined
          }
          isBusy={run.isBusy}
          onPress={() => void correct()}
        />
      }
    >
      <div className="grid gap-6">
        <ShellGrading
          places={places}
          grading={grading}
          onChange={setGrading}
          first="Touch a grade or a sign, then the shells that it belongs to."
        >
          {(palette, bench) => (
            <div className="grid items-start gap-6 @4xl/sheet:grid-cols-[22rem_minmax(0,1fr)]">
              {palette}
              <div>{bench}</div>
            </div>
          )}
        </ShellGrading>
        <BeforeAfter kept={kept} after={isClass && data} />
        <NoteField label="Why" phrases={REASONS} value={reason} onChange={setReason} />
      </div>
    </Sheet>
  );
}
