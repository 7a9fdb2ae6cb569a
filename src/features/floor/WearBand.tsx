import type { ReactNode } from 'react';
import { QuietButton } from '@/components/QuietButton';
import { WearMap } from '@/components/WearMap';
import { gradedShells, oldShells } from '@/domain/job-wear';
import { clockTime } from '@/domain/time-words';
import { useRun } from './run-context';
import { benchOf, gradingOf } from './shell-grading';
import { ShellsSay } from './ShellsSay';

/** The grades that were just kept, over the next screen until something is recorded there. */
export function WearBand({ otherwise }: { otherwise: ReactNode }) {
  const run = useRun();
  const graded = gradedShells(run.state);
  if (!graded) return otherwise;
  const { kept, shells } = graded;
  return (
    <section className="wear-band" aria-label="The old shells just graded">
      <div className="wear-band-map">
        <WearMap
          label="Wear of the old shells"
          size="small"
          rods={benchOf(oldShells(run.state.plan), gradingOf(shells))}
        />
        <div className="wear-band-end">
          <p className="floor-done">
            kept {clockTime(kept.at, run.workshop.zone)}, {run.whereIs(kept.id)}
          </p>
          <QuietButton shape="wide" label="Take back" onPress={() => run.openSheet('take back')} />
        </div>
      </div>
      <ShellsSay shells={shells} isBand />
    </section>
  );
}
