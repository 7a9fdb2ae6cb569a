import { WearMap, type WearMapRod } from '@/components/WearMap';
import { gradedShells, oldShells } from '@/domain/job-wear';
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
  const map = wearMap(shells);
  return (
    <section className="part">
      <h2 className="part-title">Wear of the old shells</h2>
      <WearMap label="Wear of the old shells" rods={rodsFor(state, shells)} />
      <div className="wear-findings">
        <p className="wear-worst">
          Worst: {gradeName(map.worst)} <span className="wear-means">{meansWords(map)}</span>
        </p>
        {map.patterns.length > 0 ? (
          <ul>
            {map.patterns.map((words) => (
              <li key={words}>{words}</li>
            ))}
          </ul>
        ) : (
          <p>No pattern stands out.</p>
        )}
        <p className="wear-hint-line">
          A hint for whoever looks further, never a verdict. Graded by eye, 0 even grey to 4 material missing,
          by {kept.valueFrom?.name ?? kept.name}, {dayAndTime(kept.valueFrom?.at ?? kept.at, zone)}
          {kept.correctedBy !== undefined && ', as corrected'}.
        </p>
      </div>
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
