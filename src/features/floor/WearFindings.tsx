import { Sign } from '@/components/Sign';
import { isWorn } from '@/domain/job-wear';
import { type GradedShell, wearMap } from '@/domain/wear';
import { gradeName, lookWords, meansWords, shellName } from '@/domain/wear-words';

/** What the graded shells say side by side, and what goes to the supervisor. */
export function WearFindings({ shells }: { shells: readonly GradedShell[] }) {
  const map = wearMap(shells);
  const worn = shells.filter(isWorn);
  return (
    <div className="wear-findings">
      <p className="wear-worst">
        Worst: {gradeName(map.worst)} <span className="wear-means">{meansWords(map)}</span>
      </p>
      {worn.length > 0 && (
        <p className="wear-worn">
          <Sign name="dot" />
          <span>
            For the supervisor, with the pins; nothing waits for it:{' '}
            {worn.map((shell) => `${shellName(shell)} ${lookWords(shell)}`).join('; ')}.
          </span>
        </p>
      )}
      {map.patterns.length > 0 ? (
        <ul>
          {map.patterns.map((words) => (
            <li key={words}>{words}</li>
          ))}
        </ul>
      ) : (
        <p>No pattern stands out.</p>
      )}
      <p className="wear-hint-line">A hint, no verdict.</p>
    </div>
  );
}
