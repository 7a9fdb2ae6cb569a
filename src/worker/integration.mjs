import { readdir, readFile, rm, stat } from 'node:fs/promises';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { build } from 'esbuild';
import { injectManifest } from 'workbox-build';

/** The pages that must open with no network; what they need is found from their text. */
const OFFLINE_PAGES = ['floor/index.html', 'floor/sums/index.html', 'offline/index.html'];
const READABLE = /\.(?:html|js|css|webmanifest)$/;
/** Every browser that can run a service worker reads .woff2, so the older form is never fetched. */
const NEVER = /\.woff$/;

/**
 * An Astro integration that bundles the service worker after the build and tells it what to precache.
 *
 * @returns {import('astro').AstroIntegration}
 */
export function serviceWorker() {
  return {
    name: 'witnessmark:service-worker',
    hooks: {
      'astro:build:done': async ({ dir, logger }) => {
        const client = fileURLToPath(dir);
        const bundle = fileURLToPath(new URL('../worker-unfilled.js', dir));
        const source = fileURLToPath(new URL('service-worker.ts', import.meta.url));
        await build({
          entryPoints: [source],
          outfile: bundle,
          bundle: true,
          minify: true,
          format: 'iife',
          target: 'es2022',
          define: { 'process.env.NODE_ENV': '"production"' },
        });
        const files = await filesNeededBy(OFFLINE_PAGES, client);
        const { count, size, warnings } = await injectManifest({
          swSrc: bundle,
          swDest: path.join(client, 'sw.js'),
          globDirectory: client,
          globPatterns: files,
          dontCacheBustURLsMatching: /^_astro\//,
          maximumFileSizeToCacheInBytes: 2 * 1024 * 1024,
        });
        await rm(bundle);
        if (warnings.length > 0)
          throw new Error(`The service worker would miss files: ${warnings.join(' ')}`);
        logger.info(`precaches ${count} files, ${Math.round(size / 1024)} kB`);
      },
    },
  };
}

/**
 * The built files that the pages name, and that those name in turn: styles, fonts, icons, and every script
 * that is imported at once or later. A built file's name holds a hash of its content, so finding that name
 * in another file's text is proof enough that it is needed.
 *
 * @param {string[]} pages
 * @param {string} client
 */
export async function filesNeededBy(pages, client) {
  const all = await listFiles(client);
  const needed = new Set();
  const queue = [...pages];
  for (let file = queue.pop(); file !== undefined; file = queue.pop()) {
    if (needed.has(file)) continue;
    needed.add(file);
    if (!READABLE.test(file)) continue;
    const text = await readFile(path.join(client, file), 'utf8');
    queue.push(
      ...all.filter((other) => !other.endsWith('.html') && !NEVER.test(other) && isNamedIn(text, other)),
    );
  }
  return [...needed].sort();
}

/** Scripts name each other by file name alone; all else is named by its path. */
function isNamedIn(text, file) {
  return text.includes(file.startsWith('_astro/') ? path.posix.basename(file) : `/${file}`);
}

async function listFiles(folder) {
  const entries = await readdir(folder, { recursive: true });
  const files = [];
  for (const entry of entries) {
    if ((await stat(path.join(folder, entry))).isFile()) files.push(entry.split(path.sep).join('/'));
  }
  return files;
}
