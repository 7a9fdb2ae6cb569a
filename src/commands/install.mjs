import { spawnSync } from 'node:child_process';
import { existsSync, lstatSync, readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import path from 'node:path';
import { CommandError, duration, say } from './console.mjs';
import { ROOT } from './root.mjs';

/** Installs what the lock file names, unless it is all there already. */
export async function installIfStale() {
  if (!isInstalled()) {
    refuseLinkedFolder();
    say('installing packages: 2 to 4 minutes, once. The longest part is compiling the database driver,');
    say('which needs python3, make and a C++ compiler on machines that no ready-made driver exists for.');
    const started = performance.now();
    npm(['ci', '--no-audit', '--no-fund', '--loglevel=error']);
    say(`installed in ${duration(started)}.`);
  } else if (!isDriverUsable()) {
    say('compiling the database driver for this Node: about 2 minutes, once.');
    npm(['rebuild', 'better-sqlite3']);
  }
  if (!isDriverUsable()) {
    throw new CommandError(
      'The database driver does not load. Install python3, make and a C++ compiler, delete node_modules, and try again.',
    );
  }
}

/** Installing empties the folder first; through a link that would be another checkout's folder. */
function refuseLinkedFolder() {
  const folder = path.join(ROOT, 'node_modules');
  if (lstatSync(folder, { throwIfNoEntry: false })?.isSymbolicLink() !== true) return;
  throw new CommandError(
    'node_modules is a link to a folder that does not fit the lock file. Nothing was installed: remove the link, and try again.',
  );
}

/**
 * Whether node_modules holds exactly what the lock file names. npm writes its own copy of the lock there
 * when, and only when, an install has ended well; packages for other platforms are missing from it.
 */
function isInstalled() {
  const stamp = path.join(ROOT, 'node_modules', '.package-lock.json');
  if (!existsSync(stamp)) return false;
  const installed = readPackages(stamp);
  const wanted = readPackages(path.join(ROOT, 'package-lock.json'));
  return Object.entries(wanted).every(([name, { version, optional }]) => {
    if (name === '') return true;
    return installed[name]?.version === version || (optional === true && installed[name] === undefined);
  });
}

function readPackages(file) {
  return JSON.parse(readFileSync(file, 'utf8')).packages;
}

/** The driver is compiled for one Node: after a change of Node it is there and yet cannot be loaded. */
function isDriverUsable() {
  try {
    const Database = createRequire(path.join(ROOT, 'package.json'))('better-sqlite3');
    new Database(':memory:').close();
    return true;
  } catch {
    return false;
  }
}

function npm(args) {
  const command = process.platform === 'win32' ? 'npm.cmd' : 'npm';
  const { status, error } = spawnSync(command, args, {
    cwd: ROOT,
    stdio: 'inherit',
    shell: process.platform === 'win32',
    // Set in production, it would leave out what the build needs.
    env: { ...process.env, NODE_ENV: 'development' },
  });
  if (error !== undefined)
    throw new CommandError(`npm could not be started (${error.message}). Install npm, then try again.`);
  if (status !== 0)
    throw new CommandError(`"npm ${args.join(' ')}" failed; its own words are above. Nothing was served.`);
}
