import type { JobFold } from './job-fold';

/** The numbers of the trail's entries that tell of a restore which this tablet met. */
export function restoresMet({ state }: JobFold, device: string): number[] {
  return state.unstepped.flatMap(({ kind, data, seq = 0 }) =>
    kind === 'restored' && 'reason' in data && data.reason?.includes(device) === true ? [seq] : [],
  );
}

/** Whether the trail tells that this tablet held what the server had lost. */
export function hasMetRestore(fold: JobFold, device: string): boolean {
  return restoresMet(fold, device).length > 0;
}
