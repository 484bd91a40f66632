import { createHash, randomBytes } from 'node:crypto';
import { gzipSync } from 'node:zlib';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { GET as listUploads, POST as postUpload } from '@/app/api/v1/plants/[plantId]/uploads/route';
import { DELETE as deleteUpload, GET as getUpload } from '@/app/api/v1/uploads/[uploadId]/route';
import { readChunk } from '@/lib/commands/import-source';
import { CHUNK_BYTES } from '@/lib/db/chunks';
import { ask, makeToken } from '../support/api';
import { problemOf, send, setScene, type Scene } from './data-scene';

let scene: Scene;
beforeAll(async () => {
  scene = await setScene();
});
afterAll(() => scene.api.close());
afterEach(() => {
  delete process.env.UPLOAD_LIMIT_BYTES;
});

const params = () => ({ plantId: scene.plantId });
const csv = (bytes: number): string => {
  const row = '2026-07-01T00:00:00Z,44.1,55.2,1000,1200\n';
  return `time,a,b,c,d\n${row.repeat(Math.ceil(bytes / row.length))}`.slice(0, bytes);
};
const sha256 = (data: string | Uint8Array) => createHash('sha256').update(data).digest('hex');

interface UploadRow {
  id: string;
  filename: string;
  status: string;
  upload_seq: number | null;
  size_bytes: string;
  sha256: string | null;
  files: { name: string; sizeBytes: number; receivedBytes: number; gzip: boolean }[];
  problems: { code: string; message: string }[];
  chunks: number;
  jobs: number;
}
/** Uploads in the order they came, with what is stored and enqueued for each. */
async function rows(): Promise<UploadRow[]> {
  const found = await scene.api.owner.query<UploadRow>(
    `select u.*, (select count(*)::int from upload_chunk c where c.upload_id = u.id) as chunks,
       (select count(*)::int from pgboss.job j where j.name = 'import-upload' and j.data->>'uploadId' = u.id::text) as jobs
     from upload u order by created_at`,
  );
  return found.rows;
}
const lastRow = async (): Promise<UploadRow> => {
  const row = (await rows()).at(-1);
  if (!row) throw new Error('no upload');
  return row;
};

const raw = (body: BodyInit, options: { name?: string; key?: string; length?: number; type?: string } = {}) =>
  send(postUpload, 'POST', {
    path: `/plants/${scene.plantId}/uploads?filename=${encodeURIComponent(options.name ?? 'week.csv')}`,
    params: params(),
    cookie: scene.engineer.cookie,
    body,
    length: options.length,
    headers: {
      'content-type': options.type ?? 'text/csv',
      ...(options.key === undefined ? {} : { 'idempotency-key': options.key }),
    },
  });

function form(files: readonly { name: string; content: string | Uint8Array<ArrayBuffer>; field?: string }[]) {
  const data = new FormData();
  for (const { name, content, field } of files) data.append(field ?? 'file', new File([content], name));
  return send(postUpload, 'POST', { params: params(), cookie: scene.engineer.cookie, body: data });
}

async function storedBytes(uploadId: string, fileIndex: number): Promise<Buffer> {
  const parts: Uint8Array[] = [];
  for (let seq = 0; ; seq++) {
    const part = await readChunk(scene.organizationId, uploadId, fileIndex, seq);
    if (!part) return Buffer.concat(parts);
    parts.push(part);
  }
}

/** A body that is made while it is read, and says how far ahead of `taken` it was ever pulled. */
function streamed(total: number, onPull?: (made: number) => Promise<void>): ReadableStream<Uint8Array> {
  const block = new TextEncoder().encode(csv(64 * 1024));
  let made = 0;
  return new ReadableStream(
    {
      async pull(controller) {
        if (made >= total) {
          controller.close();
          return;
        }
        made += block.length;
        controller.enqueue(block);
        await onPull?.(made);
      },
    },
    { highWaterMark: 0 },
  );
}

describe('an upload', () => {
  it('is kept in pieces of a MiB that unpack to the bytes that were sent, and its reading is enqueued once', async () => {
    const content = csv(2 * CHUNK_BYTES + 12_345);
    const response = await raw(content);
    expect(response.status).toBe(202);
    const { id, status } = (await response.json()) as { id: string; status: string };
    expect(status).toBe('received');
    const row = await lastRow();
    expect(row).toMatchObject({
      id,
      filename: 'week.csv',
      status: 'received',
      sha256: sha256(content),
      chunks: 3,
      jobs: 1,
    });
    expect((await storedBytes(id, 0)).toString()).toBe(content);
  });

  it('takes several files of one form as one upload, each by its own name', async () => {
    const response = await form([
      { name: 'märz.csv', content: csv(1000) },
      { name: 'notes.txt', content: 'not a file of the drop', field: 'other' },
      { name: 'april.csv', content: csv(3 * CHUNK_BYTES) },
    ]);
    expect(response.status).toBe(202);
    const row = await lastRow();
    expect(row.files.map(({ name, sizeBytes }) => [name, sizeBytes])).toEqual([
      ['märz.csv', 1000],
      ['april.csv', 3 * CHUNK_BYTES],
    ]);
    expect(row.filename).toBe('märz.csv and 1 more');
    expect(row.chunks).toBe(4);
    expect((await storedBytes(row.id, 1)).toString()).toBe(csv(3 * CHUNK_BYTES));
  });

  it('of gzip is kept as its plain bytes, and shown with the size and hash that were sent', async () => {
    const content = csv(CHUNK_BYTES + 1);
    const packed = gzipSync(content);
    expect((await raw(packed, { name: 'week.csv.gz', type: 'application/gzip' })).status).toBe(202);
    const row = await lastRow();
    expect((await storedBytes(row.id, 0)).toString()).toBe(content);
    expect(row.files[0]).toMatchObject({ gzip: true, sizeBytes: content.length, receivedBytes: packed.length });
    const shown = await ask(getUpload, 'GET', { params: { uploadId: row.id }, cookie: scene.operator.cookie });
    expect(await shown.json()).toMatchObject({ sizeBytes: packed.length, sha256: sha256(packed), status: 'received' });
  });

  it('takes no more of the body than it has stored, but for a few MiB', async () => {
    let ahead = 0;
    const total = 48 * CHUNK_BYTES;
    const body = streamed(total, async (made) => {
      if (made % (4 * CHUNK_BYTES) !== 0) return;
      const { rows: found } = await scene.api.owner.query<{ stored: number }>(
        `select coalesce(sum(raw_bytes), 0)::int as stored from upload_chunk c join upload u on u.id = c.upload_id where u.filename = 'long.csv'`,
      );
      ahead = Math.max(ahead, made - (found[0]?.stored ?? 0));
    });
    expect((await raw(body, { name: 'long.csv' })).status).toBe(202);
    expect(Number((await lastRow()).size_bytes)).toBe(total);
    expect(ahead).toBeGreaterThan(0);
    expect(ahead).toBeLessThanOrEqual(3 * CHUNK_BYTES);
  });

  it('shows while it is received which share of it has arrived', async () => {
    const total = 8 * CHUNK_BYTES;
    let seen: Record<string, unknown> = {};
    const body = streamed(total, async (made) => {
      if (made !== 6 * CHUNK_BYTES) return;
      const uploadId = (await lastRow()).id;
      seen = (await (
        await ask(getUpload, 'GET', { params: { uploadId }, cookie: scene.operator.cookie })
      ).json()) as typeof seen;
    });
    expect((await raw(body, { length: total })).status).toBe(202);
    expect(seen.status).toBe('receiving');
    expect(seen.progress).toBeGreaterThan(0.3);
    expect(seen.progress).toBeLessThan(0.9);
  });

  it('gets a place of its own in the plant’s order when two end at once', async () => {
    const answers = await Promise.all(
      Array.from({ length: 6 }, (_, index) => raw(csv(5000), { name: `at-once-${index}` })),
    );
    expect(answers.map((each) => each.status)).toEqual(Array(6).fill(202));
    const places = (await rows()).filter((row) => row.filename.startsWith('at-once')).map((row) => row.upload_seq);
    expect(new Set(places).size).toBe(6);
    expect(places).not.toContain(null);
  });
});

describe('an upload that does not come to its end', () => {
  const expectNothingKept = async (code: string, words: RegExp) => {
    const row = await lastRow();
    expect(row).toMatchObject({ status: 'failed', chunks: 0, jobs: 0, upload_seq: null });
    expect(row.problems[0]?.code).toBe(code);
    expect(row.problems[0]?.message).toMatch(words);
  };

  it('because its form is cut short is a 400, and nothing of it is kept', async () => {
    const head = '--XX\r\nContent-Disposition: form-data; name="file"; filename="cut.csv"\r\n\r\n';
    const response = await raw(head + csv(2 * CHUNK_BYTES), { type: 'multipart/form-data; boundary=XX' });
    expect(await problemOf(response)).toMatchObject({
      status: 400,
      detail: expect.stringMatching(/stopped before/) as string,
    });
    await expectNothingKept('half-finished', /send the file again/);
  });

  it('because fewer bytes came than were announced is a 400, and nothing of it is kept', async () => {
    const response = await raw(streamed(2 * CHUNK_BYTES), { length: 5 * CHUNK_BYTES });
    expect(await problemOf(response)).toMatchObject({
      status: 400,
      detail: expect.stringMatching(/cut short/) as string,
    });
    await expectNothingKept('half-finished', /cut short/);
  });

  it('because the connection broke is a 400, and nothing of it is kept', async () => {
    const body = streamed(9 * CHUNK_BYTES, async (made) => {
      if (made > 2 * CHUNK_BYTES) throw Object.assign(new Error('aborted'), { code: 'ECONNRESET' });
    });
    expect((await raw(body)).status).toBe(400);
    await expectNothingKept('half-finished', /stopped before/);
  });

  it('because its gzip is damaged is a 400 that names the file', async () => {
    const packed = gzipSync(randomBytes(3 * CHUNK_BYTES));
    const response = await raw(packed.subarray(0, 2 * CHUNK_BYTES), { name: 'half.csv.gz' });
    expect(await problemOf(response)).toMatchObject({
      status: 400,
      detail: expect.stringMatching(/"half.csv.gz"/) as string,
    });
    await expectNothingKept('half-finished', /damaged gzip/);
  });

  it('because it is larger than the limit is a 413, whether announced, found out or unpacked', async () => {
    process.env.UPLOAD_LIMIT_BYTES = String(3 * CHUNK_BYTES);
    const announced = await raw(csv(10), { length: 4 * CHUNK_BYTES });
    expect(await problemOf(announced)).toMatchObject({ status: 413, detail: expect.stringMatching(/3 MB/) as string });
    await expectNothingKept('too-large', /3 MB/);
    expect((await raw(streamed(5 * CHUNK_BYTES))).status).toBe(413);
    await expectNothingKept('too-large', /3 MB/);
    const bomb = gzipSync(Buffer.alloc(20 * CHUNK_BYTES, 'a'));
    expect(bomb.length).toBeLessThan(CHUNK_BYTES);
    expect(await problemOf(await raw(bomb))).toMatchObject({
      status: 413,
      detail: expect.stringMatching(/unpacked/) as string,
    });
    await expectNothingKept('too-large', /unpacked/);
  });

  it('because it was removed while being sent is told so at its next piece', async () => {
    const body = streamed(12 * CHUNK_BYTES, async (made) => {
      if (made !== 4 * CHUNK_BYTES) return;
      const uploadId = (await lastRow()).id;
      expect((await ask(deleteUpload, 'DELETE', { params: { uploadId }, cookie: scene.engineer.cookie })).status).toBe(
        204,
      );
    });
    expect((await raw(body, { name: 'removed.csv' })).status).toBe(409);
    expect(await lastRow()).toMatchObject({ filename: 'removed.csv', chunks: 0, jobs: 0, upload_seq: null });
  });
});

describe('a body that is no trend log', () => {
  const refusal = async (response: Promise<Response>) => {
    const before = (await rows()).length;
    const { status, detail } = await problemOf(await response);
    expect((await rows()).length).toBe(before);
    return { status, detail };
  };

  it('is refused without a row: an empty file, a form without a file, another type, no boundary', async () => {
    expect(await refusal(form([{ name: 'empty.csv', content: '' }]))).toMatchObject({
      status: 400,
      detail: expect.stringMatching(/"empty.csv" is empty/) as string,
    });
    expect(await refusal(raw(''))).toMatchObject({ status: 400 });
    expect(await refusal(form([{ name: 'a.csv', content: csv(10), field: 'data' }]))).toMatchObject({
      status: 400,
      detail: expect.stringMatching(/named "file"/) as string,
    });
    expect(await refusal(raw('{}', { type: 'application/json' }))).toMatchObject({ status: 415 });
    expect(await refusal(raw(csv(10), { type: 'multipart/form-data' }))).toMatchObject({ status: 400 });
  });

  it('is refused with what to do instead when gzip is packed in gzip', async () => {
    const words = { status: 415, detail: expect.stringMatching(/export it as CSV/) as string };
    expect(await refusal(raw(gzipSync(gzipSync(csv(100)))))).toMatchObject(words);
  });

  it('spoils the whole drop it is in, which then leaves nothing behind but a row that says so', async () => {
    const response = await form([
      { name: 'good.csv', content: csv(2 * CHUNK_BYTES) },
      { name: 'empty.csv', content: '' },
    ]);
    expect(response.status).toBe(400);
    expect(await lastRow()).toMatchObject({ filename: 'good.csv', status: 'failed', chunks: 0, jobs: 0 });
  });
});

describe('an Idempotency-Key', () => {
  it('makes a second sending of the same file the same upload, of another file a 422', async () => {
    const first = (await (await raw(csv(4000), { key: 'nightly-1' })).json()) as { id: string };
    const before = (await rows()).length;
    const again = await raw(csv(4000), { key: 'nightly-1' });
    expect([again.status, await again.json()]).toEqual([202, { id: first.id, status: 'received' }]);
    expect((await raw(csv(4001), { key: 'nightly-1' })).status).toBe(422);
    expect((await rows()).length).toBe(before);
  });

  it('is free again after an upload that failed', async () => {
    expect((await raw(streamed(2 * CHUNK_BYTES), { key: 'nightly-2', length: 9 * CHUNK_BYTES })).status).toBe(400);
    expect((await raw(csv(4000), { key: 'nightly-2' })).status).toBe(202);
  });

  it('is a 409 while its first upload is still being sent', async () => {
    let twin = 0;
    const body = streamed(3 * CHUNK_BYTES, async (made) => {
      if (made === 2 * CHUNK_BYTES) twin = (await raw(csv(4000), { key: 'nightly-3' })).status;
    });
    expect((await raw(body, { key: 'nightly-3' })).status).toBe(202);
    expect(twin).toBe(409);
  });
});

describe('who may', () => {
  it('an operator sees uploads and may neither send nor remove one', async () => {
    const { cookie } = scene.operator;
    expect((await ask(listUploads, 'GET', { params: params(), cookie })).status).toBe(200);
    const body = csv(100);
    const headers = { 'content-type': 'text/csv' };
    expect((await send(postUpload, 'POST', { params: params(), cookie, body, headers })).status).toBe(403);
    const uploadId = (await lastRow()).id;
    expect((await ask(deleteUpload, 'DELETE', { params: { uploadId }, cookie })).status).toBe(403);
  });

  it('a token of scope ingest sends to its plant, sees what it sent, and nothing else', async () => {
    const token = await makeToken(scene.api, scene.organizationId, 'ingest', scene.plantId);
    const foreign = (await lastRow()).id;
    const headers = { 'content-type': 'text/csv' };
    const response = await send(postUpload, 'POST', { params: params(), token, body: csv(100), headers });
    const { id } = (await response.json()) as { id: string };
    const listed = (await (await ask(listUploads, 'GET', { params: params(), token })).json()) as {
      items: { id: string }[];
    };
    expect(listed.items.map((each) => each.id)).toEqual([id]);
    expect((await ask(getUpload, 'GET', { params: { uploadId: id }, token })).status).toBe(200);
    expect((await ask(getUpload, 'GET', { params: { uploadId: foreign }, token })).status).toBe(404);
    expect((await ask(deleteUpload, 'DELETE', { params: { uploadId: id }, token })).status).toBe(403);
  });
});

describe('the list of uploads', () => {
  it('comes newest first in pages without a gap or a repeat, also where many came at one instant', async () => {
    await scene.api.owner.query(`update upload set created_at = date_trunc('second', created_at)`);
    const seen: string[] = [];
    let cursor: string | null = null;
    do {
      const path: string = `/?limit=3${cursor === null ? '' : `&cursor=${cursor}`}`;
      const page = (await (
        await ask(listUploads, 'GET', { path, params: params(), cookie: scene.consultant.cookie })
      ).json()) as {
        items: { id: string }[];
        nextCursor: string | null;
      };
      seen.push(...page.items.map((each) => each.id));
      cursor = page.nextCursor;
    } while (cursor !== null);
    const { rows: all } = await scene.api.owner.query<{ id: string }>(
      `select id from upload where removed_at is null order by created_at desc, id desc`,
    );
    expect(all.length).toBeGreaterThan(10);
    expect(seen).toEqual(all.map((row) => row.id));
  });
});
