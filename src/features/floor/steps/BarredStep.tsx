import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import { Sign } from '@/components/Sign';
import { whyNot } from '@/domain/job';
import type { PlanStep } from '@/domain/plan';
import { following } from '../current-step';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';

/** A step that can't be done yet: why, what unlocks it, and the way there. */
export function BarredStep({ step }: { step: PlanStep }) {
  const run = useRun();
  const verdict = whyNot(run.state, step.id);
  const unlocking = unlockingStep(run.state, step);
  const next = following(run.state, step);
  return (
    <StepFrame
      step={step}
      quiet={unlocking && <QuietButton label="Go to it" onPress={() => run.goTo(unlocking.id)} />}
      main={
        <MainAction
          label="Back to what can be done"
          next={next?.title}
          onPress={() => run.goOn(step)}
          isBusy={run.isBusy}
        />
      }
    >
      {!verdict.ok && (
        <div className="grid gap-2 rounded-md border border-rule bg-sheet px-6 py-5">
          <p className="flex items-center gap-3 text-2xl font-bold">
            <Sign name="lock" />
            Not yet
          </p>
          <p className="text-xl">{verdict.why}</p>
          {verdict.unlock !== undefined && <p className="text-xl font-bold">{verdict.unlock}</p>}
        </div>
      )}
    </StepFrame>
  );
}

/** The first step in the way that can be done itself, however deep it lies. */
function unlockingStep(state: Parameters<typeof whyNot>[0], step: PlanStep): PlanStep | undefined {
  const seen = new Set<string>([step.id]);
  let at: PlanStep | undefined = step;
  while (at) {
    const needs: string[] = at.kind === 'hold' ? [...at.needs, ...at.covers] : at.needs;
    const missing: string | undefined = needs.find((id) => !seen.has(id) && isMissing(state, id));
    if (missing === undefined) return at.id === step.id ? undefined : at;
    seen.add(missing);
    at = state.plan.steps.find(({ id }) => id === missing);
  }
  return undefined;
}

function isMissing(state: Parameters<typeof whyNot>[0], stepId: string): boolean {
  const step = state.plan.steps.find(({ id }) => id === stepId);
  if (!step || step.onDemand === true || step.kind === 'witness') return false;
  const status = state.steps[stepId]?.status;
  return status !== 'done' && status !== 'not applicable';
}
