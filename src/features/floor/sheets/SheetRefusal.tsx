import { Sign } from '@/components/Sign';
import { useRun } from '../run-context';

/** Why the last touch in a sheet was not recorded. */
export function SheetRefusal() {
  const { refusal } = useRun();
  if (!refusal) return null;
  return (
    <p role="alert" className="flex items-start gap-2 rounded-md border-4 border-outside px-4 py-3 text-lg">
      <Sign name="cross" className="text-outside" />
      <span>
        <b>Not recorded.</b> {refusal.why} {refusal.unlock !== undefined && <b>{refusal.unlock}</b>}
      </span>
    </p>
  );
}
