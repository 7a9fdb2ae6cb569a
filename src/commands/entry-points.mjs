import { fileURLToPath } from 'node:url';

/** The commands that run on a plain Node from `dist/server`, by the name of their built file. */
const COMMANDS = { serve: 'serve.ts' };

/**
 * An Astro integration that builds the commands together with the pages.
 *
 * They become further entries of the server build, so they share its chunks: every module exists once in
 * the running process, and there is one bundler, one alias and one set of build settings to understand.
 *
 * @returns {import('astro').AstroIntegration}
 */
export function commandEntryPoints() {
  return {
    name: 'witnessmark:commands',
    hooks: {
      'astro:build:setup': ({ target, updateConfig }) => {
        if (target === 'server') updateConfig({ plugins: [emitCommands()] });
      },
    },
  };
}

/** @returns {import('vite').Plugin} */
function emitCommands() {
  return {
    name: 'witnessmark:emit-commands',
    buildStart() {
      for (const [name, file] of Object.entries(COMMANDS)) {
        const id = fileURLToPath(new URL(file, import.meta.url));
        this.emitFile({ type: 'chunk', id, fileName: `${name}.mjs`, preserveSignature: 'strict' });
      }
    },
  };
}
