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

/**
 * Keeps one choice on this device and shows it at once; choosing the usual again leaves no mark. A page that
 * has a theme of its own for those who never chose (`data-default-theme` on the root) goes back to that.
 */
export function chooseLook<K extends keyof LookSettings>(
  key: K,
  value: LookSettings[K],
  { storage, root }: { storage: Pick<Storage, 'setItem' | 'removeItem'>; root: HTMLElement },
): void {
  if (value === UNCHOSEN[key]) {
    storage.removeItem(`witnessmark.${key}`);
    const usual = root.getAttribute(`data-default-${key}`);
    if (usual === null) root.removeAttribute(`data-${key}`);
    else root.setAttribute(`data-${key}`, usual);
  } else {
    storage.setItem(`witnessmark.${key}`, value);
    root.setAttribute(`data-${key}`, value);
  }
}

/** Tells of every change of the look, here or in another tab. */
export function watchLook(onChange: () => void): () => void {
  const watcher = new MutationObserver(onChange);
  watcher.observe(document.documentElement, {
    attributeFilter: ['data-theme', 'data-text', 'data-hand', 'data-motion'],
  });
  window.addEventListener('storage', onChange);
  return () => {
    watcher.disconnect();
    window.removeEventListener('storage', onChange);
  };
}

function oneOf<T extends string>(known: readonly T[], value: string | null): T | undefined {
  return known.find((each) => each === value);
}
