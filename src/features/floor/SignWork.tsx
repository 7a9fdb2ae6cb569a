import { HoldButton } from '@/components/HoldButton';
import { myWorkWords, unsignedWork } from '@/domain/job-work';
import { useRun } from './run-context';

/** Whoever works here signs for their own entries: one press-and-hold, with their number in words. */
export function SignWork({ size }: { size?: 'wide' | 'main' }) {
  const run = useRun();
  const count = unsignedWork(run.state, run.person.id).length;
  if (count === 0) return null;
  async function sign() {
    const covers = await run.ownWork();
    // More came in while it was held: the button now shows the new number, and that one is signed.
    if (covers.count === count) await run.record([{ kind: 'work-signed', with: [], data: { covers } }]);
  }
  return (
    <HoldButton
      label={myWorkWords(count)}
      hint={`press and hold, as ${run.person.name}`}
      size={size}
      onHeld={() => void sign()}
    />
  );
}
