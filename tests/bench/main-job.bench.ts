/**
 * Times the main job on a throwaway product, as the API's users see it: a week of 5-minute data from drop to chart, and a year of
 * 1-minute data through import and analysis with the worker's peak memory. `./docker-free-dev.sh bench` runs it.
 */
import path from 'node:path';
import { csvLines, SITES } from '../../fixtures/demo';
import { addDays } from '../../fixtures/demo/calendar';
import { startProduct, type Product } from '../../lib/build/product';
import { importFile, newPlant, peakMegabytes, seconds, signUp } from './product-client';

const DATA = process.env.SLACKWATER_DATA ?? '.slackwater';
const SITE = SITES.hospital;
const WEEK_DAYS = 7;
const WEEK_LIMIT_SECONDS = 5;
const WORKER_LIMIT_MB = 500;
const LAST_DAY = '2026-06-30';
/** A year has more days than a person would wait for here while trying something out: BENCH_DAYS=30 shortens it. */
const LONG_DAYS = Number(process.env.BENCH_DAYS ?? 365);

const csv = (days: number, stepMinutes: number) =>
  [...csvLines({ plant: SITE.key, fromDay: addDays(LAST_DAY, 1 - days), toDay: LAST_DAY, stepMinutes })].join('\r\n');

async function bench(product: Product): Promise<boolean> {
  // Made first: it takes a while, in which connections kept open would go stale.
  const [week, year] = [csv(WEEK_DAYS, 5), csv(LONG_DAYS, 1)];
  const client = await signUp(product.url);

  const weekPlant = await newPlant(client, 5);
  const importSeconds = await importFile(client, weekPlant, week);
  const chartMs = performance.now();
  const chart = new URLSearchParams({
    from: addDays(LAST_DAY, 1 - WEEK_DAYS),
    to: addDays(LAST_DAY, 1),
    points: 'bypassFlowGpm,blendedSupplyF,primarySupplyTemp,secondaryReturnTemp',
    width: '1200',
  });
  await client.call('GET', `/plants/${weekPlant}/series?${chart}`);
  const weekSeconds = importSeconds + seconds(chartMs);
  console.log(
    `A week of 5-minute data from drop to chart: ${weekSeconds.toFixed(2)} s (at most ${WEEK_LIMIT_SECONDS} s)`,
  );

  const yearPlant = await newPlant(client, 1);
  const yearSeconds = await importFile(client, yearPlant, year);
  const peak = peakMegabytes(product.workerPid);
  console.log(
    `${LONG_DAYS} days of 1-minute data (${(year.length / 1e6).toFixed(0)} MB) imported and analysed: ${yearSeconds.toFixed(1)} s, ` +
      `worker's peak ${peak.toFixed(0)} MB resident (at most ${WORKER_LIMIT_MB} MB)`,
  );
  return weekSeconds <= WEEK_LIMIT_SECONDS && peak <= WORKER_LIMIT_MB;
}

const product = await startProduct(path.resolve(DATA, 'bench'), { DEMO: '0' }, (text) => process.stdout.write(text));
try {
  if (!(await bench(product))) process.exitCode = 1;
} finally {
  await product.stop();
}
