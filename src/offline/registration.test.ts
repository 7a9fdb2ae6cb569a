import { describe, expect, it } from 'vitest';
import { registerWorker } from './registration';

/** A service worker as far as the page sees it. */
function fakeWorkbox(waiting: boolean) {
  const listeners = new Map<string, () => void>();
  const sent: string[] = [];
  const workbox = {
    register: async () => ({ waiting: waiting ? {} : null }) as ServiceWorkerRegistration,
    addEventListener: (type: string, listener: () => void) => void listeners.set(type, listener),
    messageSkipWaiting: () => void sent.push('skip waiting'),
    update: async () => void sent.push('update'),
  };
  return { workbox, sent, fire: (type: string) => listeners.get(type)?.() };
}

async function register(waiting: boolean) {
  const { workbox, sent, fire } = fakeWorkbox(waiting);
  const reloads: number[] = [];
  const registration = await registerWorker('/worker.js', { workbox, reload: () => reloads.push(1) });
  if (!registration) throw new Error('not registered');
  return { registration, sent, fire, reloads };
}

describe('a new version', () => {
  it('is noticed when it begins to wait, and told once', async () => {
    const { registration, fire } = await register(false);
    let told = 0;
    registration.subscribe(() => (told += 1));
    expect(registration.isWaiting()).toBe(false);
    fire('waiting');
    fire('waiting');
    expect([registration.isWaiting(), told]).toEqual([true, 1]);
  });

  it('is noticed when it waited before the page listened', async () => {
    const { registration } = await register(true);
    expect(registration.isWaiting()).toBe(true);
  });

  it('is used only when asked for, and the page is loaded anew when it is in charge', async () => {
    const { registration, sent, fire, reloads } = await register(true);
    expect(sent).toEqual([]);
    registration.activateBetweenActions();
    expect([sent, reloads]).toEqual([['skip waiting'], []]);
    fire('controlling');
    expect(reloads).toEqual([1]);
  });

  it('is not asked for where none waits, and the first worker of a page does not load it anew', async () => {
    const { registration, sent, fire, reloads } = await register(false);
    registration.activateBetweenActions();
    fire('controlling');
    expect([sent, reloads]).toEqual([[], []]);
  });

  it('is no matter in a browser without service workers', async () => {
    expect(await registerWorker('/worker.js')).toBeUndefined();
  });
});
