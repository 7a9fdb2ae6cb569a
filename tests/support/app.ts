import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdtemp, rm } from 'node:fs/promises';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import path from 'node:path';

const READY_MS = 30_000;
const ROOT = process.cwd();

/** The built program, running as a process of its own on a data folder of its own. */
export interface RunningApp {
  readonly url: string;
  readonly port: number;
  readonly dataDir: string;
  /** Everything that the server has printed so far. */
  output(): string;
  /** Kills the server as a power cut would, and waits until it is dead. */
  kill(): Promise<void>;
  /** Asks the server to stop, waits, and gives its exit code. */
  stop(): Promise<number | null>;
  /** Starts the server again on the same port and data folder; it may be killed while it starts. */
  restart(): Promise<void>;
  /** Stops the server and deletes its data folder. */
  dispose(): Promise<void>;
}

/** Starts the built program on a free port with an empty data folder, and waits until it serves. */
export async function startApp(env: Record<string, string> = {}): Promise<RunningApp> {
  const port = await freePort();
  const dataDir = await mkdtemp(path.join(tmpdir(), 'witnessmark-'));
  let printed = '';
  let child = launch();
  await readiness(child, () => printed);

  function launch(): ChildProcess {
    const started = spawn(process.execPath, ['src/commands/serve.mjs'], {
      cwd: ROOT,
      env: { ...process.env, PORT: String(port), DATA_DIR: dataDir, DEMO: 'on', ...env },
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    const remember = (chunk: Buffer) => {
      printed += chunk.toString();
    };
    started.stdout.on('data', remember);
    started.stderr.on('data', remember);
    return started;
  }

  async function end(signal: NodeJS.Signals): Promise<number | null> {
    if (child.exitCode !== null || child.signalCode !== null) return child.exitCode;
    const exited = once(child, 'exit');
    child.kill(signal);
    await exited;
    return child.exitCode;
  }

  return {
    url: `http://localhost:${port}`,
    port,
    dataDir,
    output: () => printed,
    kill: async () => {
      await end('SIGKILL');
    },
    stop: () => end('SIGTERM'),
    restart: async () => {
      await end('SIGKILL');
      printed = '';
      child = launch();
      await readiness(child, () => printed);
    },
    dispose: async () => {
      await end('SIGKILL');
      await rm(dataDir, { recursive: true, force: true });
    },
  };
}

/** Waits for the line that the server prints once it listens. */
async function readiness(child: ChildProcess, printed: () => string): Promise<void> {
  await new Promise<void>((resolve, reject) => {
    const fail = (why: string) => reject(new Error(`The server ${why}. It printed:\n${printed()}`));
    const tooLate = setTimeout(() => {
      child.kill('SIGKILL');
      fail(`was not ready after ${READY_MS} ms`);
    }, READY_MS);
    child.once('exit', (code) => {
      clearTimeout(tooLate);
      fail(`ended with code ${code} before it was ready`);
    });
    child.stdout?.on('data', () => {
      if (!printed().includes('Witnessmark is served at')) return;
      clearTimeout(tooLate);
      resolve();
    });
  });
}

async function freePort(): Promise<number> {
  const probe = createServer().listen(0, '127.0.0.1');
  await once(probe, 'listening');
  const address = probe.address();
  probe.close();
  await once(probe, 'close');
  if (address === null || typeof address === 'string') throw new Error('This machine gives no free port.');
  return address.port;
}
