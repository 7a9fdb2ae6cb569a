import { CapDrawing } from '@/components/CapDrawing';
import { ProgrammeStrip, type PassState } from '@/components/ProgrammeStrip';
import type { PlanStage, StepOf } from '@/domain/plan';
import { boltsLeftToRight } from '@/domain/engine-view';
import { amountWords, boltName } from '../done-words';
import { useRun } from '../run-context';
import type { TightenTouch } from '../tighten-touch';

/** A quarter turn, drawn where a bolt is let off. */
const RELEASE_ANGLE = -90;

/** The cap in hand from below and its programme; a joint that is no cap has its programme alone. */
export function TightenDrawings({ step, touch }: DrawingProps) {
  return (
    <div className="flex flex-wrap items-center gap-x-10 gap-y-4 pt-4">
      {step.rod !== undefined && <CapInHand step={step} rod={step.rod} touch={touch} />}
      <Programme step={step} touch={touch} />
    </div>
  );
}

interface DrawingProps {
  step: StepOf<'tighten'>;
  touch: TightenTouch;
}

function CapInHand({ step, rod, touch }: DrawingProps & { rod: number }) {
  const [action] = touch.actions;
  const { state } = useRun();
  const cycles = state.plan.programmes[step.programme]?.cycles.length ?? 0;
  const isBegun = state.steps[step.id]?.status !== 'open';
  const spec = action.kind === 'stage' ? action.spec : undefined;
  const isRelease = action.kind === 'release' || spec?.kind === 'release';
  return (
    <CapDrawing
      rod={String(rod)}
      inHand={touch.actions.map(({ bolt }) => bolt)}
      targetAngle={spec?.kind === 'angle' ? spec.target : isRelease ? RELEASE_ANGLE : undefined}
      isMarkAsked={spec?.kind === 'mark'}
      bolts={boltsLeftToRight(state, rod).map((name) => {
        const bolt = state.bolts[name];
        return {
          name,
          letter: name.slice(String(rod).length),
          state: bolt?.condemned !== undefined ? 'condemned' : bolt?.marked ? 'marked' : 'running',
          cycles,
          cyclesDone: isBegun ? Math.min(bolt?.cyclesDone ?? 0, cycles) : 0,
        };
      })}
    />
  );
}

function Programme({ step, touch }: DrawingProps) {
  const [action] = touch.actions;
  const { state } = useRun();
  const programme = state.plan.programmes[step.programme];
  if (!programme) return null;
  const at = action.kind === 'stage' ? action : { cycle: 0, stage: 0 };
  return (
    <ProgrammeStrip
      label={`${programme.title}, ${boltName(action.bolt)}`}
      cycles={programme.cycles.map((stages, cycle) => ({
        name: programme.cycles.length === 1 ? programme.title : `cycle ${cycle + 1}`,
        passes: stages.flatMap((stage, index) => {
          const label = stageLabel(stage);
          return label === undefined ? [] : [{ label, state: passState({ cycle, stage: index }, at) }];
        }),
      }))}
    />
  );
}

function stageLabel(stage: PlanStage): string | undefined {
  switch (stage.kind) {
    case 'torque':
      return amountWords(stage.target, 'N·m');
    case 'angle':
      return amountWords(stage.target, 'deg');
    case 'mark':
      return 'mark';
    case 'release':
      return undefined;
  }
}

function passState(pass: { cycle: number; stage: number }, at: { cycle: number; stage: number }): PassState {
  if (pass.cycle === at.cycle && pass.stage === at.stage) return 'now';
  return pass.cycle < at.cycle || (pass.cycle === at.cycle && pass.stage < at.stage) ? 'done' : 'waiting';
}
