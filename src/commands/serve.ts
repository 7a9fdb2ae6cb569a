import { once } from 'node:events';
import type { Server } from 'node:http';
import path from 'node:path';
import { pathToFileURL } from 'node:url';
import { type App, closeApp } from '@/server/compose';
import { keepHeadsSigned } from '@/server/daily-heads';
import { startLocalMail } from '@/server/local-mail';
import { serviceMailer } from '@/server/mail';
import { keepMailSent } from '@/server/mail-queue';
import { readSettings, SettingsError, type Settings } from '@/server/settings';
import { greeting } from './greeting';
import { createHttpServer, type PageHandler } from './http/http-server';
import { readStaticFiles } from './http/static-files';
import { prepareApp } from './prepare';

/*
 * The server process. Astro's build also builds this file (see entry-points.mjs), into the same module graph
 * as the pages: one copy of every module, so the pages and this file hold the same open database, and Node
 * runs it without a loader.
 */

const DRAIN_MS = 10_000;
const PARENT_CHECK_MS = 1_000;

/** Opens the data folder, serves, and returns when the server has been told to stop and has drained. */
export async function serve(env: NodeJS.ProcessEnv, root: string): Promise<void> {
  const settings = readSettings(env, root);
  const built = path.join(root, 'dist');
  const app = await prepareApp(settings);
  const stopSigningHeads = keepHeadsSigned(app);
  const mail = await startMail(app, settings);
  try {
    const entry = pathToFileURL(path.join(built, 'server', 'entry.mjs')).href;
    const { handler } = (await import(/* @vite-ignore */ entry)) as { handler: PageHandler };
    const files = await readStaticFiles(path.join(built, 'client'));
    const server = createHttpServer({ settings, files, handler });
    await listen(server, settings);
    console.log(await greeting(app));
    await stopSignal(env);
    await drain(server);
  } finally {
    await stopSigningHeads();
    await mail.stop();
    await closeApp(app);
  }
}

/** Sends through the mail service, or to its fake on this machine where none is set. */
async function startMail(app: App, settings: Settings): Promise<{ stop: () => Promise<void> }> {
  if (settings.mail !== undefined)
    return { stop: keepMailSent(app, serviceMailer(settings.mail, 'service')) };
  const local = await startLocalMail();
  const stopSending = keepMailSent(app, serviceMailer(local, 'here'));
  return {
    stop: async () => {
      await stopSending();
      await local.stop();
    },
  };
}

async function listen(server: Server, settings: Settings): Promise<void> {
  server.listen(settings.port, settings.host);
  try {
    await once(server, 'listening');
  } catch (error) {
    throw new SettingsError(whyNotListening(error, settings), { cause: error });
  }
}

function whyNotListening(error: unknown, { port, host }: Settings): string {
  const code = error instanceof Error && 'code' in error ? error.code : undefined;
  if (code === 'EADDRINUSE') {
    return `Port ${port} is taken by another program. Stop that one, or set PORT to a free port.`;
  }
  if (code === 'EACCES') {
    return `Port ${port} may not be used by this account. Set PORT to a number above 1023.`;
  }
  return `The server cannot listen at ${host}. Set HOST to an address of this machine, or leave it out.`;
}

/**
 * Waits to be told to stop. npm passes a signal to its shell, which dies of it without passing it on: under npm
 * the loss of the parent therefore counts as one, else the server would live on unseen and hold its port.
 */
async function stopSignal(env: NodeJS.ProcessEnv): Promise<void> {
  const parent = process.ppid;
  await new Promise<void>((resolve) => {
    process.once('SIGTERM', () => resolve());
    process.once('SIGINT', () => resolve());
    if (env.npm_lifecycle_event === undefined) return;
    const watch = setInterval(() => {
      if (process.ppid === parent) return;
      clearInterval(watch);
      resolve();
    }, PARENT_CHECK_MS);
    watch.unref();
  });
}

/** Lets the requests that are under way end; a second signal ends the process at once, by Node's own rule. */
async function drain(server: Server): Promise<void> {
  const closed = once(server, 'close');
  server.close();
  server.closeIdleConnections();
  const impatience = setTimeout(() => server.closeAllConnections(), DRAIN_MS);
  await closed;
  clearTimeout(impatience);
}
