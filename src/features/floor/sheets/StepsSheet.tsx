import { useEffect, useMemo, useRef, useState } from 'react';
import { Sign, type SignName } from '@/components/Sign';
import { progressOf, whyNot } from '@/domain/job';
import { isBlocked } from '@/domain/job-deviation';
import { DONE_PAST, donePast } from '@/domain/job-evidence';
import type { JobState } from '@/domain/job-state';
import { findStep, type PlanStep } from '@/domain/plan';
import { useRun } from '../run-context';
import { Sheet } from './Sheet';

interface StepsSheetProps {
  current: PlanStep | undefined;
  onClose: () => void;
}

/** All steps by phase and section, each with its state in words and, where it can't be done yet, why. */
export function StepsSheet({ current, onClose }: StepsSheetProps) {
  const run = useRun();
  const { phases } = run.state.plan;
  const [phaseId, setPhase] = useState(current?.phase ?? phases[0]?.id);
  const progress = progressOf(run.state);
  const sections = useMemo(() => sectionsOf(run.state, phaseId), [run.state, phaseId]);
  return (
    <Sheet title="Steps" onClose={onClose}>
      <div
        role="group"
        aria-label="Phase to show"
        className="grid grid-cols-[repeat(auto-fit,minmax(8.5rem,1fr))] gap-3 pb-4"
      >
        {progress.map((phase) => (
          <PhaseButton
            key={phase.id}
            {...phase}
            isNow={phase.id === current?.phase}
            isShown={phase.id === phaseId}
            onPress={() => setPhase(phase.id)}
          />
        ))}
      </div>
      {sections.map(({ name, steps }) => (
        <section key={name} className="pb-4">
          <h3 className="form-label border-b-2 border-text pb-1">{name}</h3>
          <ol className="grid gap-3 pt-3">
            {steps.map((step) => (
              <StepLine
                key={step.id}
                step={step}
                isCurrent={step.id === current?.id}
                onPick={() => {
                  run.goTo(step.id);
                  onClose();
                }}
              />
            ))}
          </ol>
        </section>
      ))}
    </Sheet>
  );
}

interface PhaseButtonProps extends Omit<ReturnType<typeof progressOf>[number], 'id'> {
  isNow: boolean;
  isShown: boolean;
  onPress: () => void;
}

/** A phase with how far it is; touched, it shows its steps. */
function PhaseButton({ name, done, total, blocked, isNow, isShown, onPress }: PhaseButtonProps) {
  const sign = blocked > 0 ? 'cross' : done === total ? 'tick' : isNow ? 'dot' : 'ring';
  return (
    <button type="button" className="quiet-button" data-shape="wide" aria-pressed={isShown} onClick={onPress}>
      <Sign name={sign} />
      <span>{name}</span>
      <span className="quiet-button-why">
        {' '}
        {done} of {total}
        {blocked > 0 ? ', deviation open' : ''}
      </span>
    </button>
  );
}

function sectionsOf(state: JobState, phaseId: string | undefined): { name: string; steps: PlanStep[] }[] {
  const phase = state.plan.phases.find(({ id }) => id === phaseId);
  const sections = new Map<string, PlanStep[]>();
  for (const id of phase?.steps ?? []) {
    const step = findStep(state.plan, id);
    if (step) sections.set(step.section, [...(sections.get(step.section) ?? []), step]);
  }
  return [...sections].map(([name, steps]) => ({ name, steps }));
}

function StepLine({ step, isCurrent, onPick }: { step: PlanStep; isCurrent: boolean; onPick: () => void }) {
  const { state } = useRun();
  const ref = useRef<HTMLLIElement>(null);
  const { sign, words, why } = standing(state, step);
  useEffect(() => {
    if (isCurrent) ref.current?.scrollIntoView({ block: 'center' });
  }, [isCurrent]);
  return (
    <li ref={ref} aria-current={isCurrent ? 'step' : undefined}>
      <button
        type="button"
        className={`grid min-h-18 w-full grid-cols-[2rem_1fr_auto] items-center gap-x-3 rounded-md bg-sheet px-4 py-2 text-left ${isCurrent ? 'border-4 border-text' : 'border-2 border-strong'}`}
        onClick={onPick}
      >
        <Sign name={sign} />
        <span>
          <span className="block text-lg font-semibold">{step.title}</span>
          {why !== undefined && <span className="block text-base text-soft">{why}</span>}
        </span>
        <span className="text-base font-bold">{words}</span>
      </button>
    </li>
  );
}

function standing(state: JobState, step: PlanStep): { sign: SignName; words: string; why?: string } {
  const status = state.steps[step.id]?.status ?? 'open';
  if (isBlocked(state, step.id)) return { sign: 'cross', words: 'deviation open' };
  const past = donePast(state, step.id);
  const why = past && `${DONE_PAST}: ${past.holdPoint}`;
  if (status === 'done') return { sign: 'tick', words: 'done', ...(why === undefined ? {} : { why }) };
  if (status === 'not applicable') return { sign: 'minus', words: 'not applicable' };
  if (status === 'waiting for a part') return { sign: 'ring', words: 'waiting for a part' };
  const verdict = whyNot(state, step.id);
  if (verdict.ok)
    return {
      sign: 'dot',
      words: status === 'begun' ? 'begun' : step.onDemand === true ? 'at any time' : 'can be done',
    };
  return {
    sign: 'lock',
    words: 'not yet',
    why: verdict.why,
  };
}
