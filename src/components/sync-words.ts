export interface SyncWordsProps {
  /** Records that only this tablet holds. */
  onTablet: number;
  isOnline: boolean;
  /** When something was last sent, as "09:12". */
  lastSent?: string | undefined;
  /** Records that the server refused; they are kept. */
  refused?: number | undefined;
}

/** Where the records are, in two lines of words: on this tablet, or sent. */
export function syncWords({ onTablet, isOnline, lastSent, refused = 0 }: SyncWordsProps): {
  label: string;
  note: string;
} {
  if (refused > 0) return { label: `${refused} refused`, note: 'kept here, see why' };
  if (onTablet > 0)
    return {
      label: `${onTablet} on this tablet`,
      note: isOnline ? 'being sent' : 'no network, nothing lost',
    };
  if (!isOnline)
    return {
      label: 'All sent',
      note: lastSent === undefined ? 'no network' : `no network since ${lastSent}`,
    };
  return { label: 'All sent', note: lastSent === undefined ? 'nothing waits' : `last ${lastSent}` };
}
