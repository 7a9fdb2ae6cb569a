/*
 * A new version of the program waits until the page says that nobody is in the middle of an action. The
 * records are in IndexedDB and stay as they are; only the page is loaded anew.
 */
import { Workbox } from 'workbox-window';

export interface Registration {
  /** Does a new version wait to be used? */
  isWaiting(): boolean;
  /** Calls back when one begins to wait; the answer ends it. */
  subscribe(listener: () => void): () => void;
  /** Uses it now, if one waits, and loads the page anew once it is in charge. Call it between actions. */
  activateBetweenActions(): void;
  /** Looks whether there is a new version. */
  look(): Promise<void>;
}

/** What is used of a Workbox; a test stands in for it. */
export interface WorkerHandle extends Pick<Workbox, 'register' | 'messageSkipWaiting' | 'update'> {
  addEventListener(type: 'waiting' | 'controlling', listener: () => void): void;
}

interface Parts {
  workbox?: WorkerHandle | undefined;
  reload?: (() => void) | undefined;
}

/** Registers the service worker; undefined where the browser has none (no HTTPS, or too old). */
export async function registerWorker(
  script: string,
  {
    workbox = 'serviceWorker' in navigator ? new Workbox(script) : undefined,
    reload = reloadPage,
  }: Parts = {},
): Promise<Registration | undefined> {
  if (!workbox) return undefined;
  let isWaiting = false;
  let isAsked = false;
  const listeners = new Set<() => void>();
  function noteWaiting(): void {
    if (isWaiting) return;
    isWaiting = true;
    for (const listener of listeners) listener();
  }
  workbox.addEventListener('waiting', noteWaiting);
  workbox.addEventListener('controlling', () => {
    // The first worker of a fresh page takes charge too, and then there is nothing to load anew.
    if (isAsked) reload();
  });
  const registration = await workbox.register();
  // It can have begun to wait before this page listened.
  if (registration?.waiting) noteWaiting();
  return {
    isWaiting: () => isWaiting,
    subscribe(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
    activateBetweenActions() {
      if (!isWaiting) return;
      isAsked = true;
      workbox.messageSkipWaiting();
    },
    look: () => workbox.update(),
  };
}

function reloadPage(): void {
  window.location.reload();
}
