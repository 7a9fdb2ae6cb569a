import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { CommandError, duration, explain, say } from './console.mjs';
import { ROOT } from './root.mjs';

/** Everything that the built program is made from. */
const SOURCES = [
  'src',
  'public',
  'procedures',
  'db',
  'astro.config.mjs',
  'tsconfig.json',
  'package-lock.json',
];
const STAMP = path.join(ROOT, 'dist', 'built-from');

/** Builds the program unless `dist` was made from exactly the files that are here now. */
export async function buildIfStale() {
  const fingerprint = fingerprintOf(SOURCES);
  if (existsSync(STAMP) && readFileSync(STAMP, 'utf8') === fingerprint) return;
  say('building the program: 10 to 40 seconds, only when a source file has changed.');
  const started = performance.now();
  runBuild();
  // Written last, so that a build that was broken off is done again.
  writeFileSync(STAMP, fingerprint);
  say(`built in ${duration(started)}.`);
}

/** A hash over the names and contents of files; tests are no part of the program. */
function fingerprintOf(names) {
  const hash = createHash('sha256');
  for (const name of names.flatMap(filesUnder)) {
    const content = createHash('sha256')
      .update(readFileSync(path.join(ROOT, name)))
      .digest('hex');
    hash.update(`${name}\n${content}\n`);
  }
  return hash.digest('hex');
}

function filesUnder(name) {
  const full = path.join(ROOT, name);
  if (!existsSync(full)) return [];
  if (path.extname(name) !== '') return [name];
  return readdirSync(full, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile() && !/\.test\.tsx?$/.test(entry.name))
    .map((entry) => path.relative(ROOT, path.join(entry.parentPath, entry.name)))
    .sort();
}

function runBuild() {
  const astro = path.join(ROOT, 'node_modules', 'astro', 'astro.js');
  const { status, stdout, stderr } = spawnSync(process.execPath, [astro, 'build'], {
    cwd: ROOT,
    encoding: 'utf8',
    maxBuffer: 64 * 1024 * 1024,
    env: { ...process.env, NODE_ENV: 'production', ASTRO_TELEMETRY_DISABLED: '1' },
  });
  if (status === 0) return;
  console.error(`${stdout}\n${stderr}`.trim());
  throw new CommandError('The build failed; its own words are above. Nothing was served.');
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  try {
    await buildIfStale();
  } catch (error) {
    explain(error);
    process.exitCode = 1;
  }
}
