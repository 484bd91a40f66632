import { createHash } from 'node:crypto';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { DELETE, HEAD, PATCH } from '@/app/api/v1/plants/[plantId]/uploads/resumable/[uploadId]/route';
import { OPTIONS, POST } from '@/app/api/v1/plants/[plantId]/uploads/resumable/route';
import { POST as createPlant } from '@/app/api/v1/plants/route';
import { readChunk } from '@/lib/commands/import-source';
import { CHUNK_BYTES } from '@/lib/db/chunks';
import { query } from '@/lib/db/sql';
import { withoutTenant } from '@/lib/db/tenant';
import { ask, LEAST_PLANT, makeOrganization, makePerson, makeToken } from '../support/api';
import { asWorker, problemOf, send, setScene, type Scene } from './data-scene';

let scene: Scene;
let foreignCookie: string;
let otherPlantId: string;
beforeAll(async () => {
  scene = await setScene();
  const there = await makeOrganization(scene.api);
  foreignCookie = (await makePerson(scene.api, [[there, 'owner']])).cookie;
  const json = { ...LEAST_PLANT, name: 'Second' };
  const made = await ask(createPlant, 'POST', { json, cookie: scene.engineer.cookie });
  otherPlantId = ((await made.json()) as { id: string }).id;
});
afterAll(() => scene.api.close());
afterEach(() => {
  delete process.env.UPLOAD_LIMIT_BYTES;
});

type Who = { cookie: string } | { token: string };
const TUS = { 'tus-resumable': '1.0.0' };
const base64 = (text: string): string => Buffer.from(text).toString('base64');

const begin = (
  length: number | string,
  more: { name?: string; who?: Who; plantId?: string } = {},
): Promise<Response> => {
  const { name = 'year.csv', who = { cookie: scene.engineer.cookie }, plantId = scene.plantId } = more;
  return send(POST, 'POST', {
    path: `/plants/${plantId}/uploads/resumable`,
    params: { plantId },
    ...who,
    headers: { ...TUS, 'upload-length': String(length), 'upload-metadata': `filename ${base64(name)}` },
    body: '',
  });
};
const idOf = (response: Response): string => response.headers.get('location')?.split('/').at(-1) ?? '';

interface At {
  who?: Who;
  plantId?: string;
}
const place = (uploadId: string, { who = { cookie: scene.engineer.cookie }, plantId = scene.plantId }: At) => ({
  path: `/plants/${plantId}/uploads/resumable/${uploadId}`,
  params: { plantId, uploadId },
  ...who,
});
const patch = (
  uploadId: string,
  offset: number,
  body: BodyInit,
  at: At & { length?: number } = {},
): Promise<Response> =>
  send(PATCH, 'PATCH', {
    ...place(uploadId, at),
    headers: { ...TUS, 'upload-offset': String(offset), 'content-type': 'application/offset+octet-stream' },
    body,
    ...(at.length === undefined ? {} : { length: at.length }),
  });
const bodyless = (handler: typeof HEAD, method: string, uploadId: string, at: At = {}): Promise<Response> => {
  const { path, params, ...who } = place(uploadId, at);
  const headers = new Headers({ ...TUS, host: '127.0.0.1:3000', origin: 'http://127.0.0.1:3000' });
  if ('cookie' in who) headers.set('cookie', who.cookie);
  else headers.set('authorization', `Bearer ${who.token}`);
  const request = new Request(`http://localhost:3000/api/v1${path}`, { method, headers });
  return handler(request, { params: Promise.resolve(params) });
};
const reached = async (uploadId: string): Promise<number> =>
  Number((await bodyless(HEAD, 'HEAD', uploadId)).headers.get('upload-offset'));

/** A body that breaks off after its bytes, as a lost connection does. */
const brokenAfter = (bytes: Uint8Array): ReadableStream<Uint8Array> => {
  let given = false;
  return new ReadableStream<Uint8Array>({
    pull: (controller) => {
      if (given) controller.error(Object.assign(new Error('aborted'), { code: 'ECONNRESET' }));
      else controller.enqueue(bytes);
      given = true;
    },
  });
};

const content = (bytes: number): Uint8Array<ArrayBuffer> =>
  Uint8Array.from({ length: bytes }, (_, index) => 48 + ((index * 7919 + (index >> 10)) % 10));

async function storedBytes(uploadId: string): Promise<Buffer> {
  const parts: Uint8Array[] = [];
  for (let seq = 0; ; seq++) {
    const part = await readChunk(scene.organizationId, uploadId, 0, seq);
    if (!part) return Buffer.concat(parts);
    parts.push(part);
  }
}

const row = async (uploadId: string) => {
  const { rows } = await scene.api.owner.query<Record<string, unknown>>(`select * from upload where id = $1`, [
    uploadId,
  ]);
  return rows[0] ?? {};
};
const importsOf = async (uploadId: string): Promise<number> => {
  const { rows } = await scene.api.owner.query<{ count: string }>(
    `select count(*) from pgboss.job where name = 'import-upload' and data ->> 'uploadId' = $1`,
    [uploadId],
  );
  return Number(rows[0]?.count);
};

describe('a file sent with pauses', () => {
  it('arrives whole from pieces of odd lengths, each going on from the last', async () => {
    const bytes = content(3 * CHUNK_BYTES + 12_345);
    const begun = await begin(bytes.length, { name: '../../etc/ye\u0007ar 2026.csv' });
    expect(begun.status).toBe(201);
    expect(begun.headers.get('location')).toMatch(new RegExp(`^/api/v1/plants/${scene.plantId}/uploads/resumable/`));
    expect(Date.parse(begun.headers.get('upload-expires') ?? '')).toBeGreaterThan(Date.now() + 23 * 3_600_000);
    const id = idOf(begun);
    const ends = [1, 7, 100_000, CHUNK_BYTES, CHUNK_BYTES + 1, 3 * CHUNK_BYTES - 1, bytes.length];
    let offset = 0;
    for (const end of ends) {
      const response = await patch(id, offset, bytes.subarray(offset, end));
      expect(response.status).toBe(204);
      expect(response.headers.get('upload-offset')).toBe(String(end));
      offset = end;
    }
    expect((await storedBytes(id)).equals(bytes)).toBe(true);
    const sha256 = createHash('sha256').update(bytes).digest('hex');
    expect(await row(id)).toMatchObject({
      status: 'received',
      filename: 'year 2026.csv',
      size_bytes: String(bytes.length),
      sha256,
      created_by: scene.engineer.userId,
      files: [{ name: 'year 2026.csv', sizeBytes: bytes.length, receivedBytes: bytes.length, sha256, gzip: false }],
    });
    expect(await importsOf(id)).toBe(1);
  });

  it('says with HEAD how far it has come, how long it will be, and what its sender said of it', async () => {
    const id = idOf(await begin(20));
    await patch(id, 0, 'Time,V\n');
    const response = await bodyless(HEAD, 'HEAD', id);
    expect(response.status).toBe(200);
    expect(Object.fromEntries(response.headers)).toMatchObject({
      'upload-offset': '7',
      'upload-length': '20',
      'upload-metadata': `filename ${base64('year.csv')}`,
      'cache-control': 'no-store',
    });
    expect(response.headers.has('access-control-allow-origin')).toBe(false);
  });

  it('keeps what came before the connection broke, and goes on from there', async () => {
    const bytes = content(2 * CHUNK_BYTES);
    const id = idOf(await begin(bytes.length));
    const cut = CHUNK_BYTES + 4321;
    const broken = await patch(id, 0, brokenAfter(bytes.subarray(0, cut)), { length: bytes.length });
    // Nobody hears this answer; the next question gets the same.
    expect(broken.headers.get('upload-offset')).toBe(String(cut));
    expect(await reached(id)).toBe(cut);
    expect((await patch(id, cut, bytes.subarray(cut))).status).toBe(204);
    expect((await storedBytes(id)).equals(bytes)).toBe(true);
  });

  it('refuses a piece from anywhere but its end, and stays as it was', async () => {
    const id = idOf(await begin(20));
    await patch(id, 0, 'Time,V\n');
    for (const offset of [0, 6, 8, 20]) expect((await patch(id, offset, '1,2\n')).status).toBe(409);
    expect((await storedBytes(id)).toString()).toBe('Time,V\n');
  });

  it('refuses more bytes than it was announced with', async () => {
    const id = idOf(await begin(10));
    expect((await problemOf(await patch(id, 0, 'Time,V\n1,2\n', { length: 11 }))).status).toBe(413);
    expect((await problemOf(await patch(id, 0, 'Time,V\n1,2\n'))).status).toBe(413);
    expect((await row(id)).status).toBe('receiving');
  });

  it('is refused beforehand when it is over the limit of one upload, empty, or of no length', async () => {
    process.env.UPLOAD_LIMIT_BYTES = '1000';
    expect((await begin(1000)).status).toBe(201);
    const refused = await begin(1001);
    expect(refused.headers.get('content-type')).toBe('application/problem+json');
    expect(await problemOf(refused)).toMatchObject({
      status: 413,
      detail: expect.stringContaining('1000 bytes') as string,
    });
    for (const length of [0, '-1', 'ten', '1e3']) expect((await begin(length)).status).toBe(400);
  });

  it('lets two senders at once never mix their bytes: one goes on, the other is told where the file ends', async () => {
    const bytes = content(3 * CHUNK_BYTES);
    const id = idOf(await begin(bytes.length));
    const answers = await Promise.all(Array.from({ length: 4 }, () => patch(id, 0, bytes)));
    expect(answers.map(({ status }) => status).sort()).toEqual([204, 409, 409, 409]);
    expect((await storedBytes(id)).equals(bytes)).toBe(true);
    expect(await importsOf(id)).toBe(1);
  });

  it('is taken in once, however often its last piece or a question is repeated', async () => {
    const id = idOf(await begin(7));
    expect((await patch(id, 0, 'Time,V\n')).status).toBe(204);
    const before = await row(id);
    const again = await Promise.all([patch(id, 7, ''), patch(id, 7, ''), bodyless(HEAD, 'HEAD', id)]);
    expect(again.map(({ status }) => status)).toEqual([204, 204, 200]);
    expect(await reached(id)).toBe(7);
    expect(await row(id)).toEqual(before);
    expect(await importsOf(id)).toBe(1);
  });

  it('is taken in by the next question when the process ended between the last byte and the taking in', async () => {
    const id = idOf(await begin(11));
    await patch(id, 0, 'Time,V\n');
    // The last byte committed, and nothing after it.
    await scene.api.owner.query(`update upload set announced_bytes = 7 where id = $1`, [id]);
    await Promise.all([bodyless(HEAD, 'HEAD', id), bodyless(HEAD, 'HEAD', id), patch(id, 7, '')]);
    expect((await row(id)).status).toBe('received');
    expect(await importsOf(id)).toBe(1);
  });

  it('is refused in words at its first bytes when it is of a kind that is not read, and ends', async () => {
    const id = idOf(await begin(5000, { name: 'plan.pdf' }));
    const refused = await patch(id, 0, '%PDF-1.7 and so on');
    expect(await problemOf(refused)).toMatchObject({ status: 415, detail: expect.stringContaining('a PDF') as string });
    expect(await row(id)).toMatchObject({ status: 'failed', problems: [{ code: 'unsupported' }] });
    expect((await bodyless(HEAD, 'HEAD', id)).status).toBe(410);
    expect((await patch(id, 0, 'Time')).status).toBe(410);
  });

  it('ends when its sender gives it up, and not once it has arrived', async () => {
    const id = idOf(await begin(20));
    await patch(id, 0, 'Time,V\n');
    expect((await bodyless(DELETE, 'DELETE', id)).status).toBe(204);
    expect((await row(id)).status).toBe('failed');
    expect((await storedBytes(id)).length).toBe(0);
    expect((await bodyless(HEAD, 'HEAD', id)).status).toBe(410);
    const whole = idOf(await begin(7));
    await patch(whole, 0, 'Time,V\n');
    expect((await bodyless(DELETE, 'DELETE', whole)).status).toBe(409);
    expect((await row(whole)).status).toBe('received');
  });

  it('says which version, extensions and length are spoken, and refuses a request without the version', async () => {
    const options = await send(OPTIONS, 'OPTIONS', {
      path: `/plants/${scene.plantId}/uploads/resumable`,
      params: { plantId: scene.plantId },
      cookie: scene.engineer.cookie,
      body: '',
    });
    expect(Object.fromEntries(options.headers)).toMatchObject({
      'tus-version': '1.0.0',
      'tus-extension': 'creation,creation-with-upload,termination,expiration',
      'tus-max-size': String(2 * 1024 ** 3),
    });
    const { path, params, ...who } = place(idOf(await begin(7)), {});
    const without = await send(PATCH, 'PATCH', { path, params, ...who, body: 'x' });
    expect(without.status).toBe(412);
  });
});

describe('the right to it', () => {
  it('is nobody’s of another organization, in any request', async () => {
    const id = idOf(await begin(20));
    const who = { cookie: foreignCookie };
    expect((await begin(20, { who })).status).toBe(404);
    expect((await bodyless(HEAD, 'HEAD', id, { who })).status).toBe(404);
    expect((await patch(id, 0, 'Time,V\n', { who })).status).toBe(404);
    expect((await bodyless(DELETE, 'DELETE', id, { who })).status).toBe(404);
    expect(await row(id)).toMatchObject({ status: 'receiving', size_bytes: '0' });
  });

  it('is not an operator’s, nor under another plant’s address, nor of an upload that was not begun so', async () => {
    const id = idOf(await begin(20));
    expect((await patch(id, 0, 'x', { who: { cookie: scene.operator.cookie } })).status).toBe(403);
    expect((await patch(id, 0, 'x', { plantId: otherPlantId })).status).toBe(404);
    const { rows } = await scene.api.owner.query<{ id: string }>(
      `insert into upload (organization_id, plant_id, filename) values ($1, $2, 'a.csv') returning id`,
      [scene.organizationId, scene.plantId],
    );
    expect((await patch(rows[0]?.id ?? '', 0, 'x')).status).toBe(404);
  });

  it('is an ingest token’s for its own plant and its own uploads only', async () => {
    const token = await makeToken(scene.api, scene.organizationId, 'ingest', scene.plantId);
    const who = { token };
    const id = idOf(await begin(7, { who }));
    expect((await patch(id, 0, 'Time,V\n', { who })).status).toBe(204);
    expect(await importsOf(id)).toBe(1);
    expect((await begin(7, { who, plantId: otherPlantId })).status).toBe(404);
    const engineers = idOf(await begin(20));
    expect((await patch(engineers, 0, 'x', { who })).status).toBe(404);
    const reader = await makeToken(scene.api, scene.organizationId, 'read');
    expect((await begin(7, { who: { token: reader } })).status).toBe(403);
  });
});

describe('its end when nothing more comes', () => {
  const rest = (uploadId: string, hours: number) =>
    scene.api.owner.query(`update upload set last_chunk_at = now() - make_interval(hours => $2) where id = $1`, [
      uploadId,
      hours,
    ]);
  const endAbandoned = () =>
    asWorker(scene, () => withoutTenant((em) => query(em, `select upload_id from end_abandoned_uploads()`)));

  it('comes after a day and not before, while other uploads end after a quarter of an hour', async () => {
    const waiting = idOf(await begin(20));
    const ended = idOf(await begin(20));
    for (const id of [waiting, ended]) await patch(id, 0, 'Time,V\n');
    const { rows } = await scene.api.owner.query<{ id: string }>(
      `insert into upload (organization_id, plant_id, filename) values ($1, $2, 'a.csv') returning id`,
      [scene.organizationId, scene.plantId],
    );
    const plain = rows[0]?.id ?? '';
    await rest(waiting, 23);
    await rest(ended, 25);
    await rest(plain, 1);
    expect((await bodyless(HEAD, 'HEAD', ended)).status).toBe(410);
    await endAbandoned();
    expect((await row(waiting)).status).toBe('receiving');
    expect((await row(ended)).status).toBe('failed');
    expect((await row(plain)).status).toBe('failed');
    expect((await storedBytes(ended)).length).toBe(0);
    expect((await patch(ended, 7, '1,2\n')).status).toBe(410);
    expect((await patch(waiting, 7, '1,2\n')).status).toBe(204);
  });
});
