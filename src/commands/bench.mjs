/*
 * npm run bench: how large and how quick the built program is, as a report.
 *
 * Each figure is either a size or is measured against a bare twin within the same run, so that a slow machine
 * slows both. `npm run bench -- sync replay` measures only what is named. What is measured lies in tests/bench:
 * it needs a browser and the scripted work, which the program itself does without.
 */
import { mkdirSync, rmSync } from 'node:fs';
import path from 'node:path';
import { pathToFileURL } from 'node:url';
import { build } from 'esbuild';
import { buildIfStale } from './build.mjs';
import { explain, requireNode } from './console.mjs';
import { installIfStale } from './install.mjs';
import { ROOT } from './root.mjs';

const bundles = path.join(ROOT, 'node_modules', '.cache', 'witnessmark', `bench-${process.pid}`);
try {
  requireNode();
  process.chdir(ROOT);
  await installIfStale();
  await buildIfStale();
  const { runBench } = await import(pathToFileURL(await bundleBench()).href);
  await runBench(process.argv.slice(2));
} catch (error) {
  explain(error);
  process.exitCode = 1;
} finally {
  rmSync(bundles, { recursive: true, force: true });
}

/** A plain Node reads no TypeScript; the twin of the server is a process of its own, and so a file of its own. */
async function bundleBench() {
  mkdirSync(bundles, { recursive: true });
  const source = path.join(ROOT, 'tests', 'bench');
  await build({
    entryPoints: [path.join(source, 'bench.ts'), path.join(source, 'bare-server.ts')],
    outdir: bundles,
    outExtension: { '.js': '.mjs' },
    bundle: true,
    platform: 'node',
    format: 'esm',
    packages: 'external',
    alias: { '@': path.join(ROOT, 'src'), '@db': path.join(ROOT, 'db') },
    logLevel: 'warning',
  });
  return path.join(bundles, 'bench.mjs');
}
