import { FloorFrame } from '@/components/FloorFrame';
import { QuietButton } from '@/components/QuietButton';
import type { Kept } from '@/domain/job-state';
import { clockTime, shortDay } from '@/domain/time-words';
import { doneWords } from './done-words';
import { SignWork } from './SignWork';
import { SheetRefusal } from './sheets/SheetRefusal';
import { useRun } from './run-context';

/** A phase is done: whoever worked in it signs for what they recorded, with all of it before them. */
export function WorkToSignScreen({ phase, entries }: { phase: string; entries: Kept[] }) {
  const run = useRun();
  const { zone } = run.workshop;
  return (
    <FloorFrame
      {...run.cells}
      flash={run.flash}
      quiet={
        <>
          <QuietButton label="Problem" onPress={() => run.openSheet('problem')} />
          <QuietButton label="Steps" onPress={() => run.openSheet('steps')} />
        </>
      }
      main={<SignWork size="main" />}
    >
      <h1 className="floor-step pb-3">{phase}: done. Is this your work?</h1>
      {run.refusal && <SheetRefusal {...run.refusal} />}
      <p className="max-w-[62ch] pb-4 text-lg">
        You sign for what was recorded as {run.person.name}, with your own key. Is something here not yours,
        or not so? Put it right first: touch Steps and correct it, or touch your name if somebody else worked.
      </p>
      <ol className="grid gap-x-8 @4xl/floor-main:grid-cols-2">
        {entries
          .toSorted((a, b) => a.at.localeCompare(b.at))
          .map((kept) => (
            <li key={kept.id} className="border-b border-rule py-1.5 text-lg">
              <span className="figure text-soft">
                {shortDay(kept.at, zone)} {clockTime(kept.at, zone)}
              </span>{' '}
              {doneWords(kept, run.state.plan)}
            </li>
          ))}
      </ol>
    </FloorFrame>
  );
}
