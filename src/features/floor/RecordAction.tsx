import { MainAction } from '@/components/MainAction';
import type { Draft } from '@/offline/record';
import { useRun } from './run-context';

export interface RecordActionProps {
  /** What is recorded, as "Turned 110°". */
  label: string;
  next?: string | undefined;
  /** Why it can't be recorded yet. */
  why?: string | undefined;
  drafts: () => Draft[];
  /** After it was recorded. */
  onRecorded?: (() => void) | undefined;
}

/** The main action of a step: one touch, and the screen moves only after the record is durable. */
export function RecordAction({
  label,
  next = 'touch, pedal or space',
  why,
  drafts,
  onRecorded,
}: RecordActionProps) {
  const run = useRun();
  async function record() {
    if (await run.record(drafts())) onRecorded?.();
  }
  return <MainAction label={label} next={next} why={why} isBusy={run.isBusy} onPress={() => void record()} />;
}
