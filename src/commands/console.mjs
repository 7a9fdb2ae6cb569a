import { readFileSync } from 'node:fs';
import path from 'node:path';
import { ROOT } from './root.mjs';

/** A failure whose sentence is all that a person needs; anything else is shown with its stack. */
export class CommandError extends Error {
  code = 'command-failed';
}

/** Says what is being done. */
export function say(sentence) {
  console.log(`witnessmark: ${sentence}`);
}

/** Prints why a command could not go on. */
export function explain(error) {
  const isExpected =
    error instanceof Error && (error.code === 'command-failed' || error.code === 'wrong-setting');
  console.error(isExpected ? `witnessmark: ${error.message}` : error);
}

/** Stops unless this Node is one that the program runs on. */
export function requireNode() {
  const { engines } = JSON.parse(readFileSync(path.join(ROOT, 'package.json'), 'utf8'));
  const wanted = engines.node.replace('>=', '');
  const isOldEnough = compareVersions(process.versions.node, wanted) >= 0;
  if (!isOldEnough) {
    throw new CommandError(
      `This is Node ${process.versions.node}. Install Node ${wanted} or newer, then try again.`,
    );
  }
}

function compareVersions(left, right) {
  const [a, b] = [left, right].map((version) => version.split('.').map(Number));
  const differing = a.findIndex((part, index) => part !== b[index]);
  return differing === -1 ? 0 : a[differing] - b[differing];
}

/** How long something took, in words that fit a log line. */
export function duration(sinceMs) {
  const seconds = (performance.now() - sinceMs) / 1000;
  return seconds < 90
    ? `${seconds.toFixed(1)} s`
    : `${Math.floor(seconds / 60)} min ${Math.round(seconds % 60)} s`;
}
