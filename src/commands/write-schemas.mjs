import path from 'node:path';
import { pathToFileURL } from 'node:url';
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { build } from 'esbuild';
import { format, resolveConfig } from 'prettier';
import { say } from './console.mjs';
import { ROOT } from './root.mjs';

/** Runs schemas.ts on a plain Node, which reads no TypeScript, and formats what it wrote. */
const outfile = path.join(ROOT, 'node_modules', '.cache', 'witnessmark', 'schemas.mjs');
mkdirSync(path.dirname(outfile), { recursive: true });
await build({
  entryPoints: [path.join(ROOT, 'src', 'commands', 'schemas.ts')],
  outfile,
  bundle: true,
  platform: 'node',
  format: 'esm',
  packages: 'external',
  alias: { '@': path.join(ROOT, 'src') },
  logLevel: 'warning',
});
const { writeSchemas } = await import(pathToFileURL(outfile).href);
for (const file of writeSchemas()) {
  const options = await resolveConfig(file);
  writeFileSync(file, await format(readFileSync(file, 'utf8'), { ...options, filepath: file }));
  say(`wrote ${path.relative(ROOT, file)}`);
}
