import { QuietButton } from '@/components/QuietButton';
import type { Draft } from '@/offline/record';
import { actWords, lastAct } from '../last-act';
import { useRun } from '../run-context';
import { clockTime } from '@/domain/time-words';
import { Sheet } from './Sheet';

type Which = 'touched by mistake, not done' | 'done, but wrong';

/** Takes the last act back, by telling the truth about it; the first record stays readable either way. */
export function TakeBackSheet({ onClose }: { onClose: () => void }) {
  const run = useRun();
  const acts = lastAct(run.state);
  const [newest] = acts;
  const isTightening = newest?.kind === 'tightened';
  async function takeBack(which: Which) {
    // The newest first: an act goes only while nothing later stands on it.
    const drafts = acts.map((kept): Draft => ({
      kind: 'taken-back',
      step: kept.step,
      data: { of: kept.id, which },
    }));
    if (await run.record(drafts)) onClose();
  }
  if (!newest) return null;
  return (
    <Sheet title="Take back" onClose={onClose}>
      <div className="grid gap-5">
        <p className="text-2xl font-bold">
          {clockTime(newest.at, run.workshop.zone)}: {actWords(acts, run.state.plan)}
        </p>
        <p className="text-xl">What is true?</p>
        <div className="grid gap-3 [&_.quiet-button]:min-h-26 [&_.quiet-button]:text-2xl">
          <QuietButton
            shape="wide"
            label="Touched by mistake, not done"
            onPress={() => void takeBack('touched by mistake, not done')}
          />
          <QuietButton
            shape="wide"
            label="Done, but wrong"
            onPress={() => void takeBack('done, but wrong')}
          />
        </div>
        <p className="text-lg text-soft">
          Not done: it is offered again. Done, but wrong:{' '}
          {isTightening ? 'the bolt is condemned and its cap starts again' : 'a deviation is opened'}. The
          record keeps both.
        </p>
      </div>
    </Sheet>
  );
}
