/** How this device shows the program; kept on the device, not in anybody's account. */
export interface LookSettings {
  theme: 'system' | 'paper' | 'graphite';
  text: 'normal' | 'large' | 'largest';
  hand: 'right' | 'left';
  motion: 'system' | 'reduced';
}

/** What holds while nothing is chosen; it leaves no mark on the page. */
const UNCHOSEN: LookSettings = { theme: 'system', text: 'normal', hand: 'right', motion: 'system' };

/** Reads what was chosen on this device. */
export function readLook(storage: Pick<Storage, 'getItem'>): LookSettings {
  return {
    theme: oneOf(['paper', 'graphite'] as const, storage.getItem('witnessmark.theme')) ?? UNCHOSEN.theme,
    text: oneOf(['large', 'largest'] as const, storage.getItem('witnessmark.text')) ?? UNCHOSEN.text,
    hand: oneOf(['left'] as const, storage.getItem('witnessmark.hand')) ?? UNCHOSEN.hand,
    motion: oneOf(['reduced'] as const, storage.getItem('witnessmark.motion')) ?? UNCHOSEN.motion,
  };
}

/** Keeps one choice on this device and shows it at once; choosing the usual again leaves no mark. */
export function chooseLook<K extends keyof LookSettings>(
  key: K,
  value: LookSettings[K],
  { storage, root }: { storage: Pick<Storage, 'setItem' | 'removeItem'>; root: HTMLElement },
): void {
  if (value === UNCHOSEN[key]) {
    storage.removeItem(`witnessmark.${key}`);
    root.removeAttribute(`data-${key}`);
  } else {
    storage.setItem(`witnessmark.${key}`, value);
    root.setAttribute(`data-${key}`, value);
  }
}

function oneOf<T extends string>(known: readonly T[], value: string | null): T | undefined {
  return known.find((each) => each === value);
}
