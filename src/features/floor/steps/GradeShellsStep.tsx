import { useState } from 'react';
import { QuietButton } from '@/components/QuietButton';
import { WearMap } from '@/components/WearMap';
import { lastOf } from '@/domain/job-kept';
import { gradedShells, oldShells } from '@/domain/job-wear';
import type { PlanStep, StepOf } from '@/domain/plan';
import { dayAndTime } from '@/domain/time-words';
import { NextAction } from '../NextAction';
import { RecordAction } from '../RecordAction';
import { useRun, type Run } from '../run-context';
import { benchOf, type Grading, gradingOf, shellsOf, ungraded } from '../shell-grading';
import { ShellGrading } from '../ShellGrading';
import { ShellsSay } from '../ShellsSay';
import { StepCautions, StepFrame } from '../StepFrame';
import { useIsPortrait } from '../use-is-portrait';

/** All old shells of the engine, graded side by side; once they are, what they say together. */
export function GradeShellsStep({ step }: { step: StepOf<'grade-shells'> }) {
  const { state } = useRun();
  return lastOf(state.steps[step.id], 'graded') ? <Graded step={step} /> : <ToGrade step={step} />;
}

function ToGrade({ step }: { step: StepOf<'grade-shells'> }) {
  const run = useRun();
  const isPortrait = useIsPortrait();
  const [grading, setGrading] = useState<Grading>({});
  const places = oldShells(run.state.plan);
  const shells = shellsOf(places, grading);
  return (
    <ShellGrading
      places={places}
      grading={grading}
      onChange={setGrading}
      first={[...step.how, 'Touch the grade that most of them have.'].join(' ')}
    >
      {(palette, bench) => (
        <StepFrame
          step={step}
          side={isPortrait ? null : palette}
          then={isPortrait ? undefined : null}
          heading={<Heading step={step} />}
          quiet={<OtherAction run={run} step={step} grading={grading} onClear={() => setGrading({})} />}
          main={
            <RecordAction
              label={`Keep the ${places.length} grades`}
              why={
                shells === undefined ? openWords(ungraded(places, grading).length, places.length) : undefined
              }
              drafts={() =>
                shells === undefined ? [] : [{ kind: 'graded', step: step.id, data: { shells } }]
              }
            />
          }
        >
          {bench}
          {isPortrait && <div className="pt-6">{palette}</div>}
        </StepFrame>
      )}
    </ShellGrading>
  );
}

function Heading({ step }: { step: PlanStep }) {
  return (
    <div className="grid gap-2 pb-2">
      <h1 className="floor-step">{step.title}</h1>
      <StepCautions step={step} />
    </div>
  );
}

function openWords(open: number, all: number): string {
  if (open === all) return 'touch the grade that most have';
  return open === 1 ? 'one shell has no grade' : `${open} shells have no grade`;
}

interface OtherActionProps {
  run: Run;
  step: PlanStep;
  grading: Grading;
  onClear: () => void;
}

/** One more photograph before anything is graded; afterwards a way to begin anew. */
function OtherAction({ run, step, grading, onClear }: OtherActionProps) {
  if (Object.keys(grading).length > 0) return <QuietButton label="Clear all" onPress={onClear} />;
  const photograph = run.state.plan.steps.find(
    ({ kind, phase, section }) => kind === 'photograph' && phase === step.phase && section === step.section,
  );
  return photograph === undefined ? undefined : (
    <QuietButton label="Photograph" onPress={() => run.goTo(photograph.id)} />
  );
}

function Graded({ step }: { step: StepOf<'grade-shells'> }) {
  const run = useRun();
  const graded = gradedShells(run.state);
  return (
    <StepFrame
      step={step}
      isResult
      side={null}
      heading={
        // In the part that scrolls, so that the keyboard gets there too.
        <div className="flex items-start justify-between gap-4 pb-2">
          <h1 className="floor-step">{step.title}</h1>
          <QuietButton shape="wide" label="Correct" onPress={() => run.openSheet('correct')} />
        </div>
      }
      main={<NextAction step={step} />}
    >
      {graded && (
        <div className="grid gap-4">
          <WearMap
            label="Wear of the old shells"
            rods={benchOf(oldShells(run.state.plan), gradingOf(graded.shells))}
          />
          <ShellsSay shells={graded.shells} />
          <p className="floor-done">
            {dayAndTime(graded.kept.at, run.workshop.zone)}, {graded.kept.name}
            {graded.kept.correctedBy !== undefined && ', as corrected'}
          </p>
        </div>
      )}
    </StepFrame>
  );
}
