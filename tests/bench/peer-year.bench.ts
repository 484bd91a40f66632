/**
 * A year of one-minute data (ten points, 40 MB) from being accepted to being analysed, beside what an analyst would write
 * today: a script that reads the same file, applies the textbook formula, averages by hour and stores the result in the same
 * PostgreSQL. Both in one run, as a ratio; then the same content with a row a reading beside the wide file.
 *
 * The peer's script and the file's maker lie beside the project (../shared/peers) and need Debian's python3-pandas and
 * python3-psycopg2; without them only the product's own times are printed. `./docker-free-dev.sh bench` runs it.
 */
import { spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, openAsBlob, rmSync } from 'node:fs';
import path from 'node:path';
import { startProduct } from '../../lib/build/product';
import { importFile, newPlant, peakMegabytes, signUp } from './product-client';

const DATA = path.resolve(process.env.SLACKWATER_DATA ?? '.slackwater', 'bench');
const FILES = path.resolve(DATA, '..', 'bench-files');
const PEERS = path.resolve('../shared/peers');
/** A shorter record is quicker to try out: BENCH_ROWS=43200 is a month. */
const ROWS = Number(process.env.BENCH_ROWS ?? 525_600);

const run = (command: string, args: string[]): { seconds: number; out: string; ok: boolean } => {
  const startMs = performance.now();
  const done = spawnSync(command, args, { encoding: 'utf8' });
  return { seconds: (performance.now() - startMs) / 1000, out: done.stdout + done.stderr, ok: done.status === 0 };
};

/** The lines of a file's beginning: a heading is asked about once, and the year then goes straight through. */
function make(layout: 'wide' | 'long', rows: number): string {
  const file = path.join(FILES, `${layout}-${rows}.csv`);
  if (!run('node', [path.join(PEERS, 'make_year.mjs'), String(rows), file, layout]).ok) throw new Error(`no ${file}`);
  return file;
}

if (!existsSync(PEERS)) {
  console.log('The peer files are not beside the project: nothing to compare with.');
} else {
  mkdirSync(FILES, { recursive: true });
  // Made first: it takes a while, in which connections kept open would go stale.
  const files: Record<'wide' | 'long', [day: string, year: string]> = {
    wide: [make('wide', 1440), make('wide', ROWS)],
    long: [make('long', 1440), make('long', ROWS)],
  };
  const product = await startProduct(DATA, { DEMO: '0' }, (text) => process.stdout.write(text));
  try {
    const client = await signUp(product.url);
    const timed: number[] = [];
    for (const layout of ['wide', 'long'] as const) {
      const plant = await newPlant(client, 1);
      await importFile(client, plant, await openAsBlob(files[layout][0]));
      const seconds = await importFile(client, plant, await openAsBlob(files[layout][1]));
      timed.push(seconds);
      const peak = peakMegabytes(product.workerPid);
      console.log(
        `${layout}: ${ROWS} minutes accepted to analysed in ${seconds.toFixed(1)} s, worker's peak so far ${peak.toFixed(0)} MB`,
      );
    }
    const [wide, long] = timed as [number, number];
    console.log(`a row a reading beside a column a point: ${(long / wide).toFixed(2)} times (at most 2)`);
    const peer = run('/usr/bin/python3', [path.join(PEERS, 'pandas_year.py'), files.wide[1], product.databaseUrl]);
    console.log(peer.out.trim());
    if (peer.ok)
      console.log(`the product beside the script: ${(wide / peer.seconds).toFixed(2)} times (at most 1; goal 0.5)`);
  } finally {
    await product.stop();
    rmSync(FILES, { recursive: true, force: true });
  }
}
