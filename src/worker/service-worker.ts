/*
 * The service worker. What always holds:
 * - The Floor answers from the precache even with a network, so that it opens alike in the bay and outside.
 * - No answer of the API is ever kept here: the tablet's data is in IndexedDB, and there alone.
 * - A new version waits until the page says that no action is under way; it never takes over by itself.
 */
import { cleanupOutdatedCaches, matchPrecache, precacheAndRoute } from 'workbox-precaching';
import { NavigationRoute, registerRoute } from 'workbox-routing';

declare const self: ServiceWorkerGlobalScope;

/** The pages of the Floor, which hold no data. */
const FLOOR_PAGES = [
  { address: /^\/floor\/?$/, page: '/floor/index.html' },
  { address: /^\/floor\/sums\/?$/, page: '/floor/sums/index.html' },
];
const OFFLINE_PAGE = '/offline/index.html';

for (const { address, page } of FLOOR_PAGES) {
  registerRoute(
    ({ request, url }) => request.mode === 'navigate' && address.test(url.pathname),
    async ({ request }) => (await matchPrecache(page)) ?? fetch(request),
  );
}

// The Floor has no data in its page, so what stands behind the question mark never matters to the cache.
precacheAndRoute(self.__WB_MANIFEST, { cleanURLs: false });
cleanupOutdatedCaches();

registerRoute(
  new NavigationRoute(
    async ({ request }) => {
      try {
        return await fetch(request);
      } catch (error) {
        const page = await matchPrecache(OFFLINE_PAGE);
        if (page === undefined) throw error;
        return page;
      }
    },
    { denylist: [/^\/api\//] },
  ),
);

self.addEventListener('message', (event: ExtendableMessageEvent) => {
  const message: unknown = event.data;
  if (
    typeof message === 'object' &&
    message !== null &&
    'type' in message &&
    message.type === 'SKIP_WAITING'
  ) {
    event.waitUntil(self.skipWaiting());
  }
});

// The first version takes the page that installed it at once; a later one only after SKIP_WAITING.
self.addEventListener('activate', (event) => event.waitUntil(self.clients.claim()));
