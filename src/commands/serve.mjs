/* Runs the server that has been built; what `npm start` ends in, without looking whether it is stale. */
import { existsSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { CommandError, explain } from './console.mjs';
import { ROOT } from './root.mjs';

/** Serves until the process is told to stop. */
export async function runServer() {
  const built = path.join(ROOT, 'dist', 'server', 'serve.mjs');
  if (!existsSync(built))
    throw new CommandError('The program is not built yet. Run "npm start", which builds it.');
  process.chdir(ROOT);
  const { serve } = await import('../../dist/server/serve.mjs');
  await serve(process.env, ROOT);
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  runServer().catch((error) => {
    explain(error);
    process.exitCode = 1;
  });
}
