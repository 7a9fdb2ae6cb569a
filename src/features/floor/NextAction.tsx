import { MainAction } from '@/components/MainAction';
import type { PlanStep } from '@/domain/plan';
import { following } from './current-step';
import { useRun } from './run-context';

/** Leaves a step that is done for the next that can be done. */
export function NextAction({ step, note }: { step: PlanStep; note?: string | undefined }) {
  const run = useRun();
  const next = following(run.state, step);
  if (!next)
    return (
      <MainAction
        label="Go on"
        next="to what can be done now"
        isBusy={run.isBusy}
        onPress={() => run.goOn(step)}
      />
    );
  return (
    <MainAction
      label={`Next: ${shortTitle(next, step)}`}
      next={note}
      isBusy={run.isBusy}
      onPress={() => run.goOn(step)}
    />
  );
}

const LONGEST_LABEL = 46;

/** "rod 5" where the next rod has the same to be done, else the title as far as there is room. */
function shortTitle(next: PlanStep, step: PlanStep): string {
  if (next.kind === step.kind && next.rod !== undefined && next.rod !== step.rod) return `rod ${next.rod}`;
  const title = next.rod === step.rod ? next.title.replace(/^Rod \d+: /, '') : next.title;
  return title.length <= LONGEST_LABEL
    ? `${title.charAt(0).toLowerCase()}${title.slice(1)}`
    : 'the step after this';
}
