import { Sign } from '@/components/Sign';
import { WearFindings } from '@/components/WearFindings';
import { WearMap, type WearMapRod } from '@/components/WearMap';
import { gradedShells, oldShells, WORN_SHELLS } from '@/domain/job-wear';
import type { JobState } from '@/domain/job-state';
import type { ShellHalf } from '@/domain/plan';
import { dayAndTime } from '@/domain/time-words';
import { type GradedShell, wearMap } from '@/domain/wear';
import { gradeName, lookWords, meansWords, shellName } from '@/domain/wear-words';

/** The old shells as they were graded side by side, and what their pattern commonly points to. */
export function JobWear({ state, zone }: { state: JobState; zone: string }) {
  const graded = gradedShells(state);
  if (!graded) return null;
  const { kept, shells } = graded;
  const { worst, patterns, ...means } = wearMap(shells);
  const worn = state.deviations.filter(({ rule }) => rule === WORN_SHELLS);
  return (
    <section className="part">
      <h2 className="part-title">Wear of the old shells</h2>
      <WearMap label="Wear of the old shells" rods={rodsFor(state, shells)} />
      <WearFindings
        worst={gradeName(worst)}
        means={meansWords(means)}
        patterns={patterns}
        hint={
          <>
            A hint for whoever looks further, never a verdict. Graded by eye, 0 even grey to 4 material
            missing, by {kept.valueFrom?.name ?? kept.name}, {dayAndTime(kept.valueFrom?.at ?? kept.at, zone)}
            {kept.correctedBy !== undefined && ', as corrected'}.
          </>
        }
      >
        {worn.map(({ id, class: criticalClass, words, disposed }) => (
          <p key={id} className="wear-worn">
            <Sign name={disposed ? 'tick' : 'dot'} />
            <span>
              Deviation, class {criticalClass},{' '}
              {disposed ? `${disposed.disposition} by ${disposed.name}` : 'open'}: {words}.{' '}
              {disposed ? disposed.reason : 'Nothing waits for it.'}
            </span>
          </p>
        ))}
      </WearFindings>
    </section>
  );
}

function rodsFor({ plan }: JobState, shells: readonly GradedShell[]): WearMapRod[] {
  const shellOf = (rod: number, half: ShellHalf) => {
    const shell = shells.find((one) => one.rod === rod && one.half === half);
    return (
      shell && { name: shellName(shell), grade: shell.grade, marks: shell.flags, words: lookWords(shell) }
    );
  };
  return [...new Set(oldShells(plan).map(({ rod }) => rod))].map((rod) => ({
    rod: String(rod),
    upper: shellOf(rod, 'U'),
    lower: shellOf(rod, 'L'),
  }));
}
