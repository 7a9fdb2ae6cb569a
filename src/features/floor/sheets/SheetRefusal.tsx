import { Sign } from '@/components/Sign';

/** Why the last touch in a sheet was not recorded. */
export function SheetRefusal({ why, unlock }: { why: string; unlock?: string | undefined }) {
  return (
    <p
      role="alert"
      className="flex basis-full items-start gap-2 rounded-md border-4 border-outside px-4 py-3 text-lg"
    >
      <Sign name="cross" className="text-outside" />
      <span>
        <b>Not recorded.</b> {why} {unlock !== undefined && <b>{unlock}</b>}
      </span>
    </p>
  );
}
