import { predictionWords } from '@/domain/job-prediction';
import type { JobState } from '@/domain/job-state';
import { rodsOf } from '@/domain/plan';

/** What each rod with other shells was predicted to be, beside what it was measured to be. */
export function JobPredictions({ state, unit }: { state: JobState; unit: string }) {
  const lines = rodsOf(state.plan).flatMap((rod) => {
    const present = state.rods[rod];
    const words = present && predictionWords(present);
    return words === undefined ? [] : [{ rod, words }];
  });
  if (lines.length === 0) return null;
  return (
    <ul className="pt-3" aria-label={`Predicted and measured, ${unit}`}>
      {lines.map(({ rod, words }) => (
        <li key={rod}>
          Rod {rod}: {words} ({unit})
        </li>
      ))}
    </ul>
  );
}
