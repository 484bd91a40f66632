import { createHash, randomUUID } from 'node:crypto';
import { gunzipSync, gzipSync } from 'node:zlib';
import ExcelJS from 'exceljs';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { UploadEntity, type Upload } from '@/entities';
import { textFiles, unpackUpload, type UploadFile } from '@/lib/commands/unpack-upload';
import { CHUNK_BYTES } from '@/lib/db/chunks';
import { withTenant } from '@/lib/db/tenant';
import { zipOf, type ZipPart } from '../trends/container-support';
import { setJobScene, type JobScene } from './job-scene';

let scene: JobScene;
let uploadSeq = 1;

const csv = (rows: number): string =>
  'Time,CHWS F\n' + Array.from({ length: rows }, (_, i) => `${i},${(i * 7919) % 1000}\n`).join('');
const PARTS: ZipPart[] = [
  { name: 'long.csv', content: csv(300_000) },
  { name: 'folder/short.csv', content: csv(10) },
  { name: 'picture.png', content: 'x' },
];

beforeAll(async () => {
  scene = await setJobScene();
});
afterAll(() => scene.close());
beforeEach(() => scene.owner.query('delete from upload'));

async function store(id: string, fileIndex: number, bytes: Buffer, organizationId = scene.organizationId) {
  for (let seq = 0; seq * CHUNK_BYTES < bytes.length; seq++) {
    const part = bytes.subarray(seq * CHUNK_BYTES, (seq + 1) * CHUNK_BYTES);
    await scene.owner.query('insert into upload_chunk values ($1, $2, $3, $4, $5, $6)', [
      organizationId,
      id,
      fileIndex,
      seq,
      part.length,
      gzipSync(part),
    ]);
  }
}

async function received(files: readonly { name: string; bytes: Buffer }[], of = scene): Promise<Upload> {
  const list = files.map(({ name, bytes }) => ({
    name,
    sizeBytes: bytes.length,
    receivedBytes: bytes.length,
    sha256: createHash('sha256').update(bytes).digest('hex'),
    gzip: false,
  }));
  const id = randomUUID();
  await scene.owner.query(
    `insert into upload (id, organization_id, plant_id, upload_seq, filename, files, status) values ($1, $2, $3, $4, 'drop', $5, 'received')`,
    [id, of.organizationId, of.plantId, uploadSeq++, JSON.stringify(list)],
  );
  for (const [index, { bytes }] of files.entries()) await store(id, index, bytes, of.organizationId);
  return load(id, of.organizationId);
}

const load = (id: string, organizationId = scene.organizationId): Promise<Upload> =>
  withTenant({ organizationIds: [organizationId] }, (em) => em.findOneOrFail(UploadEntity, { id }));

/** Texts of an upload's stored files by file index, and nothing that a later look has not found. */
async function stored(id: string): Promise<Map<number, string>> {
  const { rows } = await scene.owner.query<{ file_index: number; data: Buffer; raw_bytes: number }>(
    'select file_index, data, raw_bytes from upload_chunk where upload_id = $1 order by file_index, seq',
    [id],
  );
  const texts = new Map<number, string>();
  for (const { file_index: index, data, raw_bytes: size } of rows) {
    const plain = gunzipSync(data);
    expect(plain.length).toBe(size);
    texts.set(index, (texts.get(index) ?? '') + plain.toString('latin1'));
  }
  return texts;
}

/** What a reader of the upload would see: each text file's name and content. */
async function contents(id: string): Promise<Record<string, string>> {
  const texts = await stored(id);
  return Object.fromEntries(textFiles(await load(id)).map(({ index, name }) => [name, texts.get(index) ?? '']));
}

const calm = (fence: () => Promise<void> = async () => undefined) => ({
  signal: new AbortController().signal,
  fence,
});

describe('unpacking a received upload', () => {
  it('makes text files of its containers among its other files, keeps the record of what came, and lets its bytes go', async () => {
    const book = new ExcelJS.Workbook();
    book.addWorksheet('Jan').addRows([['Time'], [1]]);
    const upload = await received([
      { name: 'logs.zip', bytes: zipOf(PARTS) },
      { name: 'plain.csv', bytes: Buffer.from('Time,V\n1,2\n') },
      { name: 'book.xlsx', bytes: Buffer.from(await book.xlsx.writeBuffer()) },
    ]);
    const before = upload.files as UploadFile[];
    const { files, problems } = await unpackUpload(upload, calm());

    expect(problems.map(({ message }) => message)).toEqual([
      '"logs.zip": "picture.png" not read, because it is by its name no trend log.',
    ]);
    expect(files.slice(0, 3)).toMatchObject(before.map(({ sha256, name }) => ({ sha256, name })));
    expect(files.map(({ unpacked }) => unpacked === true)).toEqual([true, false, true, false, false, false]);
    expect(await contents(upload.id)).toEqual({
      'plain.csv': 'Time,V\n1,2\n',
      'logs.zip/long.csv': csv(300_000),
      'logs.zip/folder/short.csv': csv(10),
      'book.xlsx/Jan': 'Time\n1\n',
    });
    expect([...(await stored(upload.id)).keys()]).toEqual(textFiles(upload).map(({ index }) => index));
    expect(textFiles(upload).map(({ sizeBytes }) => sizeBytes)).toEqual([11, csv(300_000).length, csv(10).length, 7]);
    const parts = await scene.owner.query('select 1 from upload_chunk where upload_id = $1 and file_index = 3', [
      upload.id,
    ]);
    expect(parts.rowCount).toBe(Math.ceil(csv(300_000).length / CHUNK_BYTES));
  });

  it('finds nothing to do the second time and says again what was passed over', async () => {
    const upload = await received([{ name: 'logs.zip', bytes: zipOf(PARTS) }]);
    const first = await unpackUpload(upload, calm());
    const afterFirst = await stored(upload.id);
    const second = await unpackUpload(await load(upload.id), calm());
    expect(second).toEqual(first);
    expect(await stored(upload.id)).toEqual(afterFirst);
  });

  it('leaves an upload of plain text as it is', async () => {
    const upload = await received([{ name: 'plain.csv', bytes: Buffer.from('Time,V\n1,2\n') }]);
    expect(await unpackUpload(upload, calm())).toEqual({ files: upload.files, problems: [] });
    expect(textFiles(upload)).toEqual([{ index: 0, name: 'plain.csv', sizeBytes: 11 }]);
  });

  it('broken off after any of its writes counts for nothing, and the next attempt gives the same as an undisturbed one', async () => {
    const undisturbed = await received([{ name: 'logs.zip', bytes: zipOf(PARTS) }]);
    let writes = 0;
    await unpackUpload(
      undisturbed,
      calm(async () => {
        writes++;
      }),
    );
    expect(writes).toBeGreaterThan(4);

    const upload = await received([{ name: 'logs.zip', bytes: zipOf(PARTS) }]);
    for (let after = 0; after < writes; after++) {
      let left = after;
      const lost = new Error('the job is lost');
      const attempt = unpackUpload(
        await load(upload.id),
        calm(async () => {
          if (left-- === 0) throw lost;
        }),
      );
      await expect(attempt).rejects.toBe(lost);
      expect(textFiles(await load(upload.id))).toMatchObject([{ index: 0, name: 'logs.zip' }]);
    }
    await unpackUpload(await load(upload.id), calm());
    expect(await stored(upload.id)).toEqual(await stored(undisturbed.id));
    expect((await load(upload.id)).files).toEqual((await load(undisturbed.id)).files);
  });

  it('stops at the signal', async () => {
    const upload = await received([{ name: 'logs.zip', bytes: zipOf(PARTS) }]);
    const stop = new AbortController();
    const fence = async () => stop.abort(new Error('shutting down'));
    await expect(unpackUpload(upload, { signal: stop.signal, fence })).rejects.toThrow('shutting down');
  });

  it('of an upload that is removed meanwhile stores nothing more', async () => {
    const upload = await received([{ name: 'logs.zip', bytes: zipOf(PARTS) }]);
    await scene.owner.query('update upload set removed_at = now() where id = $1', [upload.id]);
    await expect(unpackUpload(upload, calm())).rejects.toThrow(/removed/);
    expect([...(await stored(upload.id)).keys()]).toEqual([0]);
  });

  it("never touches another organization's upload, even under the same index", async () => {
    const { rows } = await scene.owner.query<{ org: string; plant: string }>(
      `with other as (insert into organization (name) values ('Other') returning id)
       insert into plant (organization_id, name, time_zone, arrangement, step_minutes)
       select id, 'Theirs', 'UTC', 'primary-secondary', 1 from other returning organization_id as org, id as plant`,
    );
    const other = { ...scene, organizationId: rows[0]?.org ?? '', plantId: rows[0]?.plant ?? '' };
    const theirs = await received([{ name: 'theirs.zip', bytes: zipOf(PARTS) }], other);
    await store(theirs.id, 1, Buffer.from('left by an attempt of theirs'), other.organizationId);
    const before = await stored(theirs.id);

    const mine = await received([{ name: 'logs.zip', bytes: zipOf(PARTS) }]);
    await unpackUpload(mine, calm());
    expect(await stored(theirs.id)).toEqual(before);
    expect((await load(theirs.id, other.organizationId)).files).toEqual(theirs.files);

    // A job that names their upload under this organization sees none of it.
    const confused = { ...theirs, organizationId: scene.organizationId } as Upload;
    await unpackUpload(confused, calm());
    expect(await stored(theirs.id)).toEqual(before);
  });

  it('that cannot be done fails in words, with the files as they came', async () => {
    const upload = await received([
      { name: 'logs.zip', bytes: zipOf([...PARTS, { name: 'b.csv', content: 'x', crc: 1 }]) },
    ]);
    await expect(unpackUpload(upload, calm())).rejects.toThrow('"logs.zip/b.csv" is damaged: its checksum is wrong.');
    expect(textFiles(await load(upload.id))).toMatchObject([{ index: 0, name: 'logs.zip' }]);
  });
});
