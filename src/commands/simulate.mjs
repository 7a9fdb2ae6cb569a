/*
 * npm run simulate -- --seeds N [--from SEED]: the record under faults, seed after seed.
 *
 * Three tablets and the real server go through what one seed decides; each that breaks something is told with its
 * seed, and `--from SEED --seeds 1` has the very same run again. What runs lies in tests/support/simulation: the
 * program itself does without it.
 */
import { mkdirSync, rmSync } from 'node:fs';
import path from 'node:path';
import { pathToFileURL } from 'node:url';
import { parseArgs } from 'node:util';
import { build } from 'esbuild';
import { CommandError, explain, requireNode, say } from './console.mjs';
import { installIfStale } from './install.mjs';
import { ROOT } from './root.mjs';

const bundles = path.join(ROOT, 'node_modules', '.cache', 'witnessmark', `simulate-${process.pid}`);
try {
  requireNode();
  process.chdir(ROOT);
  const asked = readAsked(process.argv.slice(2));
  await installIfStale();
  // Before anything opens a database: the bundle need not keep to the order in which its parts are imported.
  await import('fake-indexeddb/auto');
  const { runSimulation } = await import(pathToFileURL(await bundle()).href);
  const broken = await runSimulation(asked, say);
  process.exitCode = broken === 0 ? 0 : 1;
} catch (error) {
  explain(error);
  process.exitCode = 1;
} finally {
  rmSync(bundles, { recursive: true, force: true });
}

function readAsked(args) {
  const { values } = parseArgs({ args, options: { seeds: { type: 'string' }, from: { type: 'string' } } });
  const asked = {};
  for (const [name, text] of Object.entries(values)) {
    if (!/^\d{1,9}$/.test(text)) throw new CommandError(`--${name} takes a number, such as --${name} 100.`);
    asked[name] = Number(text);
  }
  return asked;
}

/** A plain Node reads no TypeScript. */
async function bundle() {
  mkdirSync(bundles, { recursive: true });
  const outfile = path.join(bundles, 'simulate.mjs');
  await build({
    entryPoints: [path.join(ROOT, 'tests', 'support', 'simulation', 'command.ts')],
    outfile,
    bundle: true,
    platform: 'node',
    format: 'esm',
    packages: 'external',
    alias: { '@': path.join(ROOT, 'src'), '@db': path.join(ROOT, 'db') },
    logLevel: 'warning',
  });
  return outfile;
}
