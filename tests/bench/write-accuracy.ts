/**
 * Runs the accuracy bench on four fleets, and on the first with perfect sensors, and keeps what it prints for the page that
 * explains the method (components/method/accuracy.json).
 *
 *   node --import tsx tests/bench/write-accuracy.ts
 */
import { execFileSync } from 'node:child_process';
import { writeFileSync } from 'node:fs';
import path from 'node:path';
import { KERNEL_VERSION } from '../../lib/hydronics/types';
import { readAccuracy } from '../support/read-accuracy';

const ROOT = path.resolve(import.meta.dirname, '../..');
const OUT = path.join(ROOT, 'components/method/accuracy.json');
const FLEETS = [0, 1, 2, 3];

/** What the bench prints with some options. */
function bench(...options: string[]): string {
  const words = ['--import', 'tsx', 'tests/bench/accuracy.bench.ts', ...options];
  process.stdout.write(`node ${words.join(' ')}\n`);
  return execFileSync(process.execPath, words, { cwd: ROOT, encoding: 'utf8' });
}

const accuracy = {
  kernelVersion: KERNEL_VERSION,
  fleets: FLEETS.map((fleet) => readAccuracy(bench('--fleet', String(fleet), ...(fleet === 0 ? ['--plants'] : [])))),
  perfect: readAccuracy(bench('--perfect')),
};
/** A measure with its goal stands on one line, as the formatter leaves it. */
const text = JSON.stringify(accuracy, null, 2).replace(/\{\s+("value"[^{}]*?)\s+\}/g, (_, inner: string) => {
  return `{ ${inner.replace(/\s*\n\s*/g, ' ')} }`;
});
writeFileSync(OUT, `${text}\n`);
process.stdout.write(`${path.relative(ROOT, OUT)} written\n`);
