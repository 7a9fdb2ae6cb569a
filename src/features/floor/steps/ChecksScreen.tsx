import { useState } from 'react';
import type { PlanCheck, PlanStep } from '@/domain/plan';
import type { Draft } from '@/offline/record';
import { answersOf, CheckAnswers, exceptionWords, type CheckAnswer, type Exceptions } from '../CheckAnswers';
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
  const [exceptions, setExceptions] = useState<Exceptions>({});
  const bad = exceptionWords(checks, exceptions);
  return (
    <StepFrame
      step={step}
      main={
        <RecordAction
          label={bad ?? allLabel}
          next={bad === undefined ? 'or touch what isn’t' : undefined}
          why={why}
          drafts={() => [draft(answersOf(checks, exceptions))]}
        />
      }
    >
      <CheckAnswers label="Checks" checks={checks} exceptions={exceptions} onChange={setExceptions} />
    </StepFrame>
  );
}
