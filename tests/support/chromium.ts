import { execFile } from 'node:child_process';
import { access, mkdir, readFile, rename, rm } from 'node:fs/promises';
import path from 'node:path';
import { promisify } from 'node:util';

const run = promisify(execFile);

const USUAL_PLACES = [
  '/usr/bin/google-chrome',
  '/usr/bin/chromium',
  '/usr/bin/chromium-browser',
  '/snap/bin/chromium',
  '/Applications/Google Chrome.app/Contents/MacOS/Google Chrome',
];

/** How a browser is started for the tests. */
export interface BrowserLaunch {
  executablePath: string;
  args: string[];
  env: Record<string, string>;
}

/** Finds the browser: CHROMIUM_PATH, the usual places, else the one inside a development package. */
export async function findBrowser(): Promise<BrowserLaunch> {
  const args = [
    '--disable-background-networking',
    '--disable-component-update',
    '--disable-sync',
    '--disable-quic',
    // Root has no user namespace to make a sandbox of; a test browser only ever sees our own pages.
    ...(process.getuid?.() === 0 ? ['--no-sandbox'] : []),
  ];
  const asked = process.env.CHROMIUM_PATH;
  if (asked !== undefined && asked !== '') {
    if (await exists(asked)) return { executablePath: asked, args, env: {} };
    throw new Error(
      `CHROMIUM_PATH is "${asked}", but there is no such file. Set it to a Chrome or Chromium, or leave it out.`,
    );
  }
  for (const place of USUAL_PLACES) if (await exists(place)) return { executablePath: place, args, env: {} };
  return await packagedBrowser([...args, '--no-sandbox']);
}

/**
 * The browser that ships packed in a development package, unpacked once beside the packages. It brings the
 * libraries that a bare machine lacks; they are put in its way only where the machine has none of its own.
 */
async function packagedBrowser(args: string[]): Promise<BrowserLaunch> {
  const packages = path.join(process.cwd(), 'node_modules');
  const manifest = await readFile(path.join(packages, '@sparticuz', 'chromium', 'package.json'), 'utf8');
  const { version } = JSON.parse(manifest) as { version: string };
  const folder = path.join(packages, '.cache', `test-browser-${version}`);
  const executablePath = path.join(folder, 'chromium');
  if (!(await exists(executablePath))) await unpack(folder);
  const { stdout } = await run('ldd', [executablePath]);
  const lacksLibraries = stdout.includes('not found');
  return {
    executablePath,
    args,
    env: {
      ...(lacksLibraries ? { LD_LIBRARY_PATH: path.join(folder, 'al2023', 'lib') } : {}),
      ...((await exists('/etc/fonts/fonts.conf')) ? {} : { FONTCONFIG_PATH: path.join(folder, 'fonts') }),
    },
  };
}

/** Unpacks beside and renames into place, so that a broken-off run never leaves half a browser. */
async function unpack(folder: string): Promise<void> {
  const beside = `${folder}.${process.pid}`;
  await mkdir(beside, { recursive: true });
  const script = "import('@sparticuz/chromium').then((module) => module.default.executablePath())";
  // The package unpacks into TMPDIR, and its libraries only where it believes itself in a cloud function.
  const env = { ...process.env, TMPDIR: beside, AWS_EXECUTION_ENV: 'AWS_Lambda_nodejs20.x' };
  await run(process.execPath, ['-e', script], { env });
  await rename(beside, folder).catch(async (error: unknown) => {
    await rm(beside, { recursive: true, force: true });
    // Another run may have unpacked it meanwhile, which is as good.
    if (!(await exists(folder))) throw error;
  });
}

async function exists(file: string): Promise<boolean> {
  return access(file).then(
    () => true,
    () => false,
  );
}
