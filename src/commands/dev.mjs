/* npm run dev: installs if needed, then Astro's development server on the same data folder as npm start. */
import { spawn } from 'node:child_process';
import path from 'node:path';
import { explain, requireNode } from './console.mjs';
import { installIfStale } from './install.mjs';
import { ROOT } from './root.mjs';

try {
  requireNode();
  await installIfStale();
  const astro = path.join(ROOT, 'node_modules', 'astro', 'astro.js');
  const child = spawn(process.execPath, [astro, 'dev', '--port', process.env.PORT || '4321'], {
    cwd: ROOT,
    stdio: 'inherit',
    env: { ...process.env, ASTRO_TELEMETRY_DISABLED: '1', ASTRO_DISABLE_UPDATE_CHECK: 'true' },
  });
  child.once('exit', (code) => {
    process.exitCode = code ?? 0;
  });
  for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => child.kill(signal));
} catch (error) {
  explain(error);
  process.exitCode = 1;
}
