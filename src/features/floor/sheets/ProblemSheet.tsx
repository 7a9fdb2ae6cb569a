import { HoldButton } from '@/components/HoldButton';
import { QuietButton } from '@/components/QuietButton';
import { nextTightening } from '@/domain/job';
import { entryForAction } from '@/domain/job-tightening';
import type { PlanStep, StepOf } from '@/domain/plan';
import { useRun, type SheetName } from '../run-context';
import { toolUsed } from '../tighten-touch';
import { correctableOn } from './correct-fields';
import { Sheet } from './Sheet';

interface ProblemSheetProps {
  step: PlanStep | undefined;
  onClose: () => void;
}

/** The honest ways out of a step that can't simply be done. */
export function ProblemSheet({ step, onClose }: ProblemSheetProps) {
  const run = useRun();
  const parking = run.state.plan.steps.find(({ kind }) => kind === 'make-safe');
  const open = (name: SheetName) => () => run.openSheet(name);
  return (
    <Sheet title={step ? `Problem: ${step.title}` : 'Problem'} onClose={onClose}>
      <div className="grid gap-5">
        {step?.kind === 'tighten' && <TighteningProblems step={step} onClose={onClose} />}
        {step?.kind === 'gauge' && <MeasureAgain step={step} onClose={onClose} />}
        <div className="grid gap-3 @container sm:grid-cols-2 [&_.quiet-button]:justify-start [&_.quiet-button]:text-xl">
          <QuietButton shape="wide" label="Raise a deviation" onPress={open('deviation')} />
          <QuietButton shape="wide" label="Take back the last act" onPress={open('take back')} />
          {correctableOn(run.state, step).length > 0 && (
            <QuietButton shape="wide" label="Correct a record of this step" onPress={open('correct')} />
          )}
          {step && step.kind !== 'hold' && (
            <QuietButton
              shape="wide"
              label={
                run.state.steps[step.id]?.status === 'waiting for a part'
                  ? 'The part is here'
                  : 'Waiting for a part'
              }
              onPress={open('waiting for a part')}
            />
          )}
          {step && step.kind !== 'hold' && (
            <QuietButton shape="wide" label="Not applicable" onPress={open('not applicable')} />
          )}
          <QuietButton
            shape="wide"
            label="Done earlier, recorded now"
            onPress={open('recorded afterwards')}
          />
          <QuietButton shape="wide" label="Extra work" onPress={open('extra work')} />
          <QuietButton shape="wide" label="Another torque wrench" onPress={open('torque tool')} />
          <QuietButton shape="wide" label="Another angle gauge" onPress={open('angle tool')} />
          {parking && (
            <QuietButton
              shape="wide"
              label="Make safe and park"
              onPress={() => {
                run.goTo(parking.id);
                onClose();
              }}
            />
          )}
          <QuietButton shape="wide" label="End the job unfinished" onPress={open('end unfinished')} />
        </div>
      </div>
    </Sheet>
  );
}

function TighteningProblems({ step, onClose }: { step: StepOf<'tighten'>; onClose: () => void }) {
  const run = useRun();
  const next = nextTightening(run.state, step);
  if (next?.kind !== 'stage') return null;
  const isPass = next.spec.kind === 'torque' || next.spec.kind === 'angle';
  async function startAgain() {
    const reason = `not sure what was done on ${step.bolts.join(' and ')}`;
    if (await run.record([{ kind: 'started-again', step: step.id, data: { bolts: step.bolts, reason } }]))
      onClose();
  }
  async function condemn() {
    const entry = next && entryForAction(run.state, step, next);
    if (entry?.kind !== 'tightened') return;
    const tool = run.state.tools[entry.data.target.kind];
    const data = { ...entry.data, outcome: 'over' as const, ...(tool ? { tool: toolUsed(tool) } : {}) };
    if (await run.record([{ kind: 'tightened', step: step.id, data }])) onClose();
  }
  return (
    <div className="grid gap-3">
      {isPass && (
        <HoldButton
          label={`${next.bolt} was turned too far: condemn it`}
          hint="press and hold; its partner is let off and the cap starts again"
          tone="stop"
          onHeld={() => void condemn()}
        />
      )}
      <HoldButton
        label={`Not sure: start ${step.bolts.join(' and ')} again`}
        hint="press and hold; all bolts are let off, one more tightening is counted"
        onHeld={() => void startAgain()}
      />
    </div>
  );
}

function MeasureAgain({ step, onClose }: { step: StepOf<'gauge'>; onClose: () => void }) {
  const run = useRun();
  async function measureAgain() {
    if (await run.record([{ kind: 'measuring-again', step: step.id, data: {} }])) onClose();
  }
  return (
    <HoldButton
      label="Measure again with new thread"
      hint="press and hold; the readings are void, and the bolts are tightened once more"
      onHeld={() => void measureAgain()}
    />
  );
}
