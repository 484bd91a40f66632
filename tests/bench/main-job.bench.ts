/**
 * Times the main job on a throwaway product, as the API's users see it: a week of 5-minute data from drop to chart, and a year of
 * 1-minute data through import and analysis with the worker's peak memory. `./docker-free-dev.sh bench` runs it.
 */
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { z } from 'zod';
import { csvLines, SITES } from '../../fixtures/demo';
import { addDays } from '../../fixtures/demo/calendar';
import { startProduct, type Product } from '../../lib/build/product';
import { FINAL_UPLOAD_STATUSES, Preview, Upload } from '../../lib/schemas/upload';

const DATA = process.env.SLACKWATER_DATA ?? '.slackwater';
const SITE = SITES.hospital;
const WEEK_DAYS = 7;
const WEEK_LIMIT_SECONDS = 5;
const WORKER_LIMIT_MB = 500;
const LAST_DAY = '2026-06-30';
/** A year has more days than a person would wait for here while trying something out: BENCH_DAYS=30 shortens it. */
const LONG_DAYS = Number(process.env.BENCH_DAYS ?? 365);

class Client {
  private cookie = '';
  constructor(private readonly base: string) {}

  async call(method: string, route: string, body?: BodyInit, type = 'application/json'): Promise<unknown> {
    const answer = await fetch(`${this.base}/api/v1${route}`, {
      method,
      headers: { origin: this.base, cookie: this.cookie, ...(body === undefined ? {} : { 'content-type': type }) },
      ...(body === undefined ? {} : { body }),
    });
    const text = await answer.text();
    if (!answer.ok) throw new Error(`${method} ${route} answered ${answer.status}: ${text}`);
    const cookie = answer.headers.get('set-cookie');
    if (cookie !== null) this.cookie = cookie.split(';')[0] ?? '';
    return text === '' ? null : JSON.parse(text);
  }
}

const Created = z.object({ id: z.string() });
const seconds = (sinceMs: number) => (performance.now() - sinceMs) / 1000;
const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

async function untilFinal(client: Client, uploadId: string): Promise<Upload> {
  for (;;) {
    const upload = Upload.parse(await client.call('GET', `/uploads/${uploadId}`));
    if (FINAL_UPLOAD_STATUSES.includes(upload.status)) return upload;
    await pause(100);
  }
}

async function newPlant(client: Client, stepMinutes: number): Promise<string> {
  const plant = { ...SITE.create, name: `Bench, ${stepMinutes} min`, stepMinutes };
  return Created.parse(await client.call('POST', '/plants', JSON.stringify(plant))).id;
}

/** Uploads, confirms the suggested columns when asked to, and waits; answers seconds from drop to done. */
async function importFile(client: Client, plantId: string, text: string): Promise<number> {
  const startMs = performance.now();
  const route = `/plants/${plantId}/uploads?filename=bench.csv`;
  const { id } = Created.parse(await client.call('POST', route, text, 'text/csv'));
  let upload = await untilFinal(client, id);
  if (upload.status === 'needs-mapping') {
    const preview = Preview.parse(await client.call('GET', `/uploads/${id}/preview`));
    await client.call('PUT', `/uploads/${id}/mapping`, JSON.stringify({ ...preview, remember: true }));
    do {
      await pause(50);
      upload = Upload.parse(await client.call('GET', `/uploads/${id}`));
    } while (upload.status === 'needs-mapping');
    upload = await untilFinal(client, id);
  }
  if (upload.status !== 'done')
    throw new Error(`The upload ended as ${upload.status}: ${JSON.stringify(upload.problems)}`);
  return seconds(startMs);
}

const csv = (days: number, stepMinutes: number) =>
  [...csvLines({ plant: SITE.key, fromDay: addDays(LAST_DAY, 1 - days), toDay: LAST_DAY, stepMinutes })].join('\r\n');

function peakMegabytes(pid: number): number {
  const kilobytes = /^VmHWM:\s+(\d+) kB$/m.exec(readFileSync(`/proc/${pid}/status`, 'utf8'))?.[1];
  return Number(kilobytes) / 1024;
}

async function bench(product: Product): Promise<boolean> {
  // Made first: it takes a while, in which connections kept open would go stale.
  const [week, year] = [csv(WEEK_DAYS, 5), csv(LONG_DAYS, 1)];
  const client = new Client(product.url);
  const account = {
    organizationName: 'Bench',
    name: 'Bench',
    email: 'bench@demo.example',
    password: 'tide-after-tide-9',
  };
  await client.call('POST', '/accounts', JSON.stringify(account));

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
