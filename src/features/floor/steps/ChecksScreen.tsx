import { useState } from 'react';
import type { PlanCheck, PlanStep } from '@/domain/plan';
import type { Draft } from '@/offline/record';
import {
  allInOrder,
  CheckAnswers,
  completeAnswers,
  missingWords,
  type Answers,
  type CheckAnswer,
} from '../CheckAnswers';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';

export interface ChecksScreenProps {
  step: PlanStep;
  checks: PlanCheck[];
  draft: (answers: CheckAnswer[]) => Draft;
  /** The action that answers everything in order. */
  allLabel?: string | undefined;
  /** Why it can't be recorded, whatever the answers. */
  why?: string | undefined;
}

/** The checks of a step and the action that keeps the answers. */
export function ChecksScreen({ step, checks, draft, allLabel = 'All in order', why }: ChecksScreenProps) {
  const [answers, setAnswers] = useState<Answers>({});
  const isBegun = Object.keys(answers).length > 0;
  const complete = isBegun ? completeAnswers(checks, answers) : allInOrder(checks);
  const bad = complete?.filter(({ ok }) => !ok).length ?? 0;
  const label = bad > 0 ? `Keep, ${bad} not in order` : isBegun ? 'Keep the answers' : allLabel;
  return (
    <StepFrame
      step={step}
      main={
        <RecordAction
          label={label}
          why={why ?? (complete ? undefined : missingWords(checks, answers))}
          drafts={() => [draft(complete ?? [])]}
        />
      }
    >
      <CheckAnswers label="Checks" checks={checks} answers={answers} onChange={setAnswers} />
    </StepFrame>
  );
}
