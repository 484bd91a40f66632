import { spawn, type ChildProcess } from 'node:child_process';
import { createWriteStream, existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
import path from 'node:path';
import { startProduct, type Product } from './product';
import { isGreen, playwrightCounts, summaryLines, vitestCounts, type StepResult, type TestCounts } from './test-counts';

/**
 * Everything continuous integration runs, after docker-free-dev.sh has installed what it needs: style, types, unit and database
 * tests, and the browser tests against the built product as a person starts it. Every step runs even when another one failed.
 */
const ROOT = path.resolve(import.meta.dirname, '../..');
const RESULTS = path.join(ROOT, 'test-results');
const DATA = process.env.SLACKWATER_DATA ?? path.join(ROOT, '.slackwater');
const TAIL_LINES = 60;

const steps: StepResult[] = [];
const running = new Set<ChildProcess>();
let product: Product | null = null;

const seconds = (sinceMs: number) => (performance.now() - sinceMs) / 1000;
const logOf = (name: string) => path.join(RESULTS, `${name.replaceAll(/[^a-z]+/g, '-')}.log`);

function record(step: StepResult): void {
  steps.push(step);
  console.log(`${step.ok ? 'ok  ' : 'FAIL'} ${step.seconds.toFixed(1).padStart(7)} s  ${step.name}`);
  if (step.ok) return;
  const lines = readFileSync(logOf(step.name), 'utf8').trimEnd().split('\n');
  console.log(`${lines.slice(-TAIL_LINES).join('\n')}\n(all of it: ${path.relative(ROOT, logOf(step.name))})`);
}

/** Runs a tool of node_modules by its file, so that nothing stands between a signal and the tool. */
async function run(name: string, tool: string, args: string[], count?: () => TestCounts): Promise<void> {
  const startMs = performance.now();
  const log = createWriteStream(logOf(name));
  const child = spawn(process.execPath, [path.join(ROOT, 'node_modules', tool), ...args], {
    cwd: ROOT,
    env: { ...process.env, CI: '1', FORCE_COLOR: '0', ...(product === null ? {} : { BASE_URL: product.url }) },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  running.add(child);
  for (const stream of [child.stdout, child.stderr]) stream.pipe(log, { end: false });
  const code = await new Promise<number | null>((resolve) => child.once('close', (exit) => resolve(exit)));
  running.delete(child);
  await new Promise<void>((resolve) => log.end(resolve));
  const counts = count === undefined ? undefined : counted(count);
  record({ name, seconds: seconds(startMs), ok: code === 0 && counts !== null, counts: counts ?? undefined });
}

/** Null when the tool left no report to count from. */
function counted(count: () => TestCounts): TestCounts | null {
  try {
    return count();
  } catch {
    return null;
  }
}

const report = (file: string): unknown => JSON.parse(readFileSync(path.join(RESULTS, file), 'utf8'));

async function vitest(name: string, projects: string[]): Promise<void> {
  const file = `${name.replaceAll(' ', '-')}.json`;
  await run(
    name,
    'vitest/vitest.mjs',
    [
      'run',
      ...projects.map((project) => `--project=${project}`),
      '--reporter=default',
      '--reporter=json',
      `--outputFile.json=${path.join(RESULTS, file)}`,
    ],
    () => vitestCounts(report(file)),
  );
}

async function buildAndStart(): Promise<void> {
  const startMs = performance.now();
  const name = 'build and start';
  const log = createWriteStream(logOf(name));
  try {
    product = await startProduct(path.join(DATA, 'product'), { DEMO: '1' }, (text) => log.write(text));
  } catch (error) {
    log.write(String(error));
  }
  await new Promise<void>((resolve) => log.end(resolve));
  record({ name, seconds: seconds(startMs), ok: product !== null });
}

async function stopProduct(): Promise<void> {
  const startMs = performance.now();
  const code = await product?.stop();
  record({ name: 'stop', seconds: seconds(startMs), ok: code === 0 });
}

async function checks(): Promise<void> {
  rmSync(RESULTS, { recursive: true, force: true });
  mkdirSync(RESULTS);
  // The build keeps one core busy for long stretches; what only reads sources shares the time with it.
  await Promise.all([
    buildAndStart(),
    run('format', 'prettier/bin/prettier.cjs', ['--check', '.']).then(() => run('lint', 'eslint/bin/eslint.js', ['.'])),
  ]);
  // The types that Next.js writes for routes are there only after the build.
  await Promise.all([run('types', 'typescript/bin/tsc', ['--noEmit']), vitest('unit tests', ['unit', 'dom'])]);
  await vitest('database tests', ['database']);
  if (product !== null) {
    await run('browser tests', '@playwright/test/cli.js', ['test'], () => playwrightCounts(report('playwright.json')));
    await stopProduct();
  }
}

function interrupted(signal: NodeJS.Signals): void {
  for (const child of running) child.kill(signal);
  void Promise.resolve(product?.stop()).finally(() => process.exit(130));
}
process.once('SIGINT', interrupted);
process.once('SIGTERM', interrupted);

if (!existsSync(path.join(ROOT, 'node_modules')))
  throw new Error('Run ./docker-free-dev.sh test, which installs first.');
await checks();
console.log(`\n${summaryLines(steps).join('\n')}`);
process.exitCode = isGreen(steps) ? 0 : 1;
