import { readFileSync } from 'node:fs';
import { z } from 'zod';
import { SITES } from '../../fixtures/demo';
import { FINAL_UPLOAD_STATUSES, Preview, Upload } from '../../lib/schemas/upload';

const SITE = SITES.hospital;

/** The API as a script uses it, signed in with a cookie. */
export class Client {
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
export const seconds = (sinceMs: number) => (performance.now() - sinceMs) / 1000;
const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

async function untilFinal(client: Client, uploadId: string): Promise<Upload> {
  for (;;) {
    const upload = Upload.parse(await client.call('GET', `/uploads/${uploadId}`));
    if (FINAL_UPLOAD_STATUSES.includes(upload.status)) return upload;
    await pause(100);
  }
}

export async function newPlant(client: Client, stepMinutes: number): Promise<string> {
  const plant = { ...SITE.create, name: `Bench, ${stepMinutes} min`, stepMinutes };
  return Created.parse(await client.call('POST', '/plants', JSON.stringify(plant))).id;
}

/** Uploads, confirms the suggested columns when asked to, and waits; answers seconds from drop to done. */
export async function importFile(client: Client, plantId: string, content: string | Blob): Promise<number> {
  const startMs = performance.now();
  const route = `/plants/${plantId}/uploads?filename=bench.csv`;
  const { id } = Created.parse(await client.call('POST', route, content, 'text/csv'));
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

/** Makes an account of its own and answers its client. */
export async function signUp(base: string): Promise<Client> {
  const client = new Client(base);
  const account = {
    organizationName: 'Bench',
    name: 'Bench',
    email: 'bench@demo.example',
    password: 'tide-after-tide-9',
  };
  await client.call('POST', '/accounts', JSON.stringify(account));
  return client;
}

/** The most memory a process has held, in MB. */
export function peakMegabytes(pid: number): number {
  const kilobytes = /^VmHWM:\s+(\d+) kB$/m.exec(readFileSync(`/proc/${pid}/status`, 'utf8'))?.[1];
  return Number(kilobytes) / 1024;
}
