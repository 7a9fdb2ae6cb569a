import { Sign } from '@/components/Sign';
import { WearFindings } from '@/components/WearFindings';
import { isWorn } from '@/domain/job-wear';
import { type GradedShell, wearMap } from '@/domain/wear';
import { gradeName, lookWords, meansWords, shellName } from '@/domain/wear-words';

/** In the band over the next step there is room for the first of them. */
const MOST_IN_BAND = 2;

/** What the graded shells say side by side, and which go to the supervisor. */
export function ShellsSay({ shells, isBand = false }: { shells: readonly GradedShell[]; isBand?: boolean }) {
  const { worst, patterns, ...means } = wearMap(shells);
  const worn = shells.filter(isWorn);
  const names = worn.map((shell) => (isBand ? shellName(shell) : `${shellName(shell)} ${lookWords(shell)}`));
  return (
    <WearFindings
      worst={gradeName(worst)}
      means={meansWords(means)}
      patterns={patterns}
      most={isBand ? MOST_IN_BAND : undefined}
      hint="A hint, no verdict."
    >
      {worn.length > 0 && (
        <p className="wear-worn">
          <Sign name="dot" />
          <span>
            For the supervisor, with {worn.length === 1 ? 'its pin' : 'their pins'}:{' '}
            {names.join(isBand ? ', ' : '; ')}. Nothing waits for it.
          </span>
        </p>
      )}
    </WearFindings>
  );
}
