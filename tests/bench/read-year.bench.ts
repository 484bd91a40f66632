/**
 * Reads one CSV as the import job does and prints seconds, rows a second and the peak of resident memory.
 *
 *   node --max-old-space-size=256 --import tsx tests/bench/read-year.bench.ts year.csv
 *
 * The file needs the headings of a ten-point plant ("P Sup T (F)" and so on) and month/day/year times in UTC.
 */
import { createReadStream } from 'node:fs';
import { createTrendReader } from '../../lib/trends/reader';
import type { ReadPlan } from '../../lib/trends/types';

/** The job keeps as many days open. */
const OPEN_DAYS = 40;
const CHUNK_BYTES = 1024 * 1024;

const plan: ReadPlan = {
  dialect: { encoding: 'utf-8', delimiter: ',', decimal: '.', headerRow: 1, unitRow: null, firstDataRow: 2 },
  timestamp: { columns: ['Timestamp'], form: 'month/day/year' },
  timeZone: process.argv[3] ?? 'UTC',
  stepMinutes: 5,
  columns: [
    { column: 'P Sup T (F)', role: 'primarySupplyTemp', unit: 'degF' },
    { column: 'S Sup T (F)', role: 'secondarySupplyTemp', unit: 'degF' },
    { column: 'S Ret T (F)', role: 'secondaryReturnTemp', unit: 'degF' },
    { column: 'P Ret T (F)', role: 'primaryReturnTemp', unit: 'degF' },
    { column: 'Byp T (F)', role: 'bypassTemp', unit: 'degF' },
    { column: 'P Flow gpm', role: 'primaryFlow', unit: 'gpm' },
    { column: 'S Flow gpm', role: 'secondaryFlow', unit: 'gpm' },
    { column: 'Byp Flow gpm', role: 'bypassFlow', unit: 'gpm' },
    { column: 'Plant kW', role: 'plantPower', unit: 'kW' },
    { column: 'OAT F', role: 'outdoorTemp', unit: 'degF' },
  ],
};

const file = process.argv[2];
if (!file) throw new Error('usage: read-year.bench.ts <file.csv> [time zone]');
const startMs = performance.now();
const reader = createTrendReader(plan);
let days = 0;
for await (const chunk of createReadStream(file, { highWaterMark: CHUNK_BYTES })) {
  reader.push(chunk as Buffer);
  days += reader.takeOldestDays(OPEN_DAYS).length;
}
days += reader.finish().length;
const seconds = (performance.now() - startMs) / 1000;
const { rowsRead, samplesStored, problems } = reader.report();
const { user, system } = process.cpuUsage();
const peakMb = process.resourceUsage().maxRSS / 1024;
console.log(
  `${rowsRead} rows, ${days} column days, ${samplesStored} samples in ${seconds.toFixed(2)} s ` +
    `(${((user + system) / 1e6).toFixed(2)} s of processor, start-up included), peak ${peakMb.toFixed(0)} MB`,
);
for (const problem of problems) console.log(`row ${problem.row}: ${problem.message} (${problem.count})`);
