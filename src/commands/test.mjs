/*
 * npm test: from a fresh clone to a verdict, with nothing installed but Node.
 *
 * Runs every step below in turn, or those that are named (`npm test -- lint unit`), says what runs and how
 * long it took, and ends with the line `N passed, N failed`. A step without tests of its own counts as one.
 * Counts are read from the test runners' JSON reports; a runner that fails without saying which test failed
 * counts as one failure, and a runner that found no test has failed.
 */
import { spawn, spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { buildIfStale } from './build.mjs';
import { CommandError, duration, explain, requireNode, say } from './console.mjs';
import { installIfStale } from './install.mjs';
import { ROOT } from './root.mjs';
import { countPlaywright, countVitest } from './test-report.mjs';

const STEPS = {
  types: { what: 'types (20 to 60 s)', checks: ['astro', 'check', '--minimumSeverity', 'warning'] },
  lint: { what: 'lint (20 to 90 s)', checks: ['eslint', '--max-warnings', '0', '.'] },
  layers: { what: 'who imports whom', checks: ['depcruise', 'src', 'db', 'tests'] },
  format: { what: 'format', checks: ['prettier', '--check', '--log-level', 'warn', '.'] },
  unit: { what: 'unit, standards and integration tests (4 to 10 min)', run: runVitest },
  build: { what: 'build (10 to 40 s)', run: runBuild },
  e2e: { what: 'end-to-end tests in a browser (up to 7 min)', run: runPlaywright },
};

const ENVIRONMENT = {
  cwd: ROOT,
  env: { ...process.env, NODE_ENV: 'test', ASTRO_TELEMETRY_DISABLED: '1' },
};

const reports = mkdtempSync(path.join(tmpdir(), 'witnessmark-reports-'));
const total = { passed: 0, failed: 0 };
try {
  requireNode();
  process.chdir(ROOT);
  const names = chosenSteps(process.argv.slice(2));
  await installIfStale();
  // What only reads the sources uses one core each, so it runs side by side.
  await Promise.all(names.filter((name) => STEPS[name].checks).map(runStep));
  for (const name of names.filter((one) => STEPS[one].run)) await runStep(name);
} catch (error) {
  explain(error);
  total.failed += 1;
} finally {
  rmSync(reports, { recursive: true, force: true });
}
process.exitCode = total.failed > 0 || total.passed === 0 ? 1 : 0;
console.log(`${total.passed} passed, ${total.failed} failed`);

function chosenSteps(asked) {
  const unknown = asked.filter((name) => !(name in STEPS));
  if (unknown.length > 0) {
    throw new CommandError(
      `There is no step "${unknown.join(', ')}". Name some of: ${Object.keys(STEPS).join(', ')}.`,
    );
  }
  return asked.length > 0 ? asked : Object.keys(STEPS);
}

async function runStep(name) {
  const { what, run, checks } = STEPS[name];
  say(`${what} ...`);
  const started = performance.now();
  const { passed, failed } = await (run ?? (() => check(...checks)))();
  total.passed += passed;
  total.failed += failed;
  say(`${name}: ${passed} passed, ${failed} failed, in ${duration(started)}.`);
}

/** A step that either holds or doesn't; what it has to say is shown in one piece, since others run beside it. */
async function check(program, ...args) {
  const child = spawn(process.execPath, [binaryOf(program), ...args], { ...ENVIRONMENT, stdio: 'pipe' });
  let said = '';
  for (const stream of [child.stdout, child.stderr])
    stream.setEncoding('utf8').on('data', (text) => (said += text));
  const status = await new Promise((resolve) => {
    child.on('error', (error) => {
      said += error.message;
      resolve(1);
    });
    child.on('close', (code) => resolve(code ?? 1));
  });
  if (said.trim() !== '') console.log(said.trimEnd());
  return status === 0 ? { passed: 1, failed: 0 } : { passed: 0, failed: 1 };
}

async function runBuild() {
  try {
    await buildIfStale();
    return { passed: 1, failed: 0 };
  } catch (error) {
    explain(error);
    return { passed: 0, failed: 1 };
  }
}

function runVitest() {
  const file = path.join(reports, 'vitest.json');
  const status = runProgram('vitest', [
    'run',
    '--reporter=dot',
    '--reporter=json',
    `--outputFile.json=${file}`,
    '--allowOnly=false',
  ]);
  return countVitest(readReport(file), status);
}

function runPlaywright() {
  const file = path.join(reports, 'playwright.json');
  const status = runProgram('playwright', ['test', '--config', 'tests/e2e', '--reporter=list,json'], {
    PLAYWRIGHT_JSON_OUTPUT_NAME: file,
  });
  return countPlaywright(readReport(file), status);
}

/** A runner that was broken off leaves no report, or half of one. */
function readReport(file) {
  try {
    return JSON.parse(readFileSync(file, 'utf8'));
  } catch {
    return undefined;
  }
}

/** Runs a program of node_modules, its output shown as it comes, and gives its exit status. */
function runProgram(program, args, env = {}) {
  const { status, error } = spawnSync(process.execPath, [binaryOf(program), ...args], {
    ...ENVIRONMENT,
    stdio: 'inherit',
    env: { ...ENVIRONMENT.env, ...env },
  });
  if (error !== undefined) console.error(error.message);
  return status ?? 1;
}

function binaryOf(program) {
  const packages = { depcruise: 'dependency-cruiser', playwright: '@playwright/test' };
  const folder = path.join(ROOT, 'node_modules', packages[program] ?? program);
  const { bin } = JSON.parse(readFileSync(path.join(folder, 'package.json'), 'utf8'));
  return path.join(folder, typeof bin === 'string' ? bin : bin[program]);
}
