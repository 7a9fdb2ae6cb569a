import node from '@astrojs/node';
import react from '@astrojs/react';
import tailwindcss from '@tailwindcss/vite';
import { defineConfig } from 'astro/config';
import { commandEntryPoints } from './src/commands/entry-points.mjs';
import { serviceWorker } from './src/worker/integration.mjs';

export default defineConfig({
  output: 'server',
  adapter: node({ mode: 'middleware' }),
  integrations: [react(), commandEntryPoints(), serviceWorker()],
  security: {
    // Host and forwarded headers are judged by src/commands/http before Astro sees a request, by settings that
    // are not known when this is built. The origin of unsafe requests is judged by src/middleware.ts, for JSON too.
    allowedDomains: [{}],
    checkOrigin: false,
  },
  experimental: {
    csp: {
      directives: [
        "default-src 'self'",
        "object-src 'none'",
        "base-uri 'self'",
        "form-action 'self'",
        "worker-src 'self'",
        "img-src 'self' blob: data:",
      ],
    },
  },
  vite: {
    plugins: [tailwindcss()],
    // The package's own entry is written for older browsers, and larger.
    resolve: { alias: { dexie: 'dexie/dist/modern/dexie.mjs' } },
    // A data: address would need a wider content policy than 'self'.
    build: {
      assetsInlineLimit: 0,
      // What comes later is fetched ahead and kept by the service worker: lists of it only delay the first script.
      modulePreload: false,
    },
  },
  devToolbar: { enabled: false },
});
