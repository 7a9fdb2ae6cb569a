import { fileURLToPath } from 'node:url';
import { ROOT } from './root.mjs';

/** The commands that a plain Node runs from `dist/server`: NAME.ts here becomes NAME.mjs there. */
const COMMANDS = ['serve', 'verify-trail', 'backup', 'restore', 'renew-key'];

/**
 * An Astro integration that builds the commands together with the pages, and makes the data folder ready for
 * the development server.
 *
 * They become further entries of the server build, so they share its chunks: every module exists once in
 * the running process, and there is one bundler, one alias and one set of build settings to understand.
 *
 * @returns {import('astro').AstroIntegration}
 */
export function commandEntryPoints() {
  let devServer;
  return {
    name: 'witnessmark:commands',
    hooks: {
      'astro:build:setup': ({ target, updateConfig }) => {
        if (target === 'server') updateConfig({ plugins: [emitCommands()] });
      },
      'astro:server:setup': ({ server }) => {
        devServer = server;
      },
      // Not at the set-up: a check of the types sets a server up too, and must not make a data folder.
      'astro:server:start': async ({ logger }) => {
        const { prepareDevelopment } = await devServer.ssrLoadModule('/src/commands/develop.ts');
        logger.info(await prepareDevelopment(process.env, ROOT));
      },
    },
  };
}

/** @returns {import('vite').Plugin} */
function emitCommands() {
  return {
    name: 'witnessmark:emit-commands',
    buildStart() {
      for (const name of COMMANDS) {
        const id = fileURLToPath(new URL(`${name}.ts`, import.meta.url));
        this.emitFile({ type: 'chunk', id, fileName: `${name}.mjs`, preserveSignature: 'strict' });
      }
    },
  };
}
