/*
 * Runs one of the commands that are built with the program: `node src/commands/run.mjs NAME ARGUMENTS`.
 *
 * A command is a module src/commands/NAME.ts, listed in entry-points.mjs, that exports
 * `main(args: string[], cwd: string): Promise<number>` and gives its exit code. `cwd` is the folder that npm was
 * called from, which paths among the arguments are relative to.
 */
import { buildIfStale } from './build.mjs';
import { explain, requireNode } from './console.mjs';
import { installIfStale } from './install.mjs';
import { ROOT } from './root.mjs';

const [name, ...args] = process.argv.slice(2);
const calledFrom = process.env.INIT_CWD ?? process.cwd();
try {
  requireNode();
  process.chdir(ROOT);
  await installIfStale();
  await buildIfStale();
  const { main } = await import(`../../dist/server/${name}.mjs`);
  process.exitCode = await main(args, calledFrom);
} catch (error) {
  explain(error);
  process.exitCode = 1;
}
