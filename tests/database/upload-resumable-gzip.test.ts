import { gzipSync } from 'node:zlib';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { POST } from '@/app/api/v1/plants/[plantId]/uploads/resumable/route';
import { GET as getUpload } from '@/app/api/v1/uploads/[uploadId]/route';
import { UploadEntity } from '@/entities';
import { readChunk } from '@/lib/commands/import-source';
import { textFiles, unpackUpload } from '@/lib/commands/unpack-upload';
import { CHUNK_BYTES } from '@/lib/db/chunks';
import { withTenant } from '@/lib/db/tenant';
import { zipOf } from '../trends/container-support';
import { ask } from '../support/api';
import { asWorker, send, setScene, type Scene } from './data-scene';

let scene: Scene;
beforeAll(async () => {
  scene = await setScene();
});
afterAll(() => scene.api.close());
afterEach(() => {
  delete process.env.UPLOAD_LIMIT_BYTES;
});

describe('gzip that arrived resumably, begun and sent in one request', () => {
  const text = Buffer.from(
    'Time,V\n' + Array.from({ length: 300_000 }, (_, i) => `${i},${(i * 7919) % 1000}\n`).join(''),
  );
  const arrive = async (bytes: Uint8Array<ArrayBuffer>): Promise<string> => {
    const begun = await send(POST, 'POST', {
      path: `/plants/${scene.plantId}/uploads/resumable`,
      params: { plantId: scene.plantId },
      cookie: scene.engineer.cookie,
      headers: {
        'tus-resumable': '1.0.0',
        'upload-length': String(bytes.length),
        'upload-metadata': `filename ${Buffer.from('year.csv.gz').toString('base64')}`,
        'content-type': 'application/offset+octet-stream',
      },
      body: bytes,
    });
    expect(begun.status).toBe(201);
    expect(begun.headers.get('upload-offset')).toBe(String(bytes.length));
    return begun.headers.get('location')?.split('/').at(-1) ?? '';
  };
  const unpacked = (id: string) =>
    asWorker(scene, async () => {
      const tenancy = { organizationIds: [scene.organizationId] };
      const upload = await withTenant(tenancy, (em) => em.findOneOrFail(UploadEntity, { id }));
      const { files } = await unpackUpload(upload, {
        signal: new AbortController().signal,
        fence: () => Promise.resolve(),
      });
      return files;
    });
  const bytesOf = async (id: string, fileIndex: number): Promise<Buffer> => {
    const parts: Uint8Array[] = [];
    for (let seq = 0; ; seq++) {
      const part = await readChunk(scene.organizationId, id, fileIndex, seq);
      if (!part) return Buffer.concat(parts);
      parts.push(part);
    }
  };

  it('is unpacked by the worker into the text it was', async () => {
    expect(text.length).toBeGreaterThan(2 * CHUNK_BYTES);
    const id = await arrive(Uint8Array.from(gzipSync(text)));
    const [member, ...others] = textFiles({ files: await unpacked(id) });
    expect(others).toEqual([]);
    expect(member).toMatchObject({ name: 'year.csv.gz', sizeBytes: text.length });
    expect((await bytesOf(id, member?.index ?? -1)).equals(text)).toBe(true);
    expect((await bytesOf(id, 0)).length).toBe(0);
  });

  it('keeps the size it was sent with when its text has come out', async () => {
    const packed = Uint8Array.from(gzipSync(text));
    const id = await arrive(packed);
    await unpacked(id);
    const shown = await ask(getUpload, 'GET', { params: { uploadId: id }, cookie: scene.engineer.cookie });
    expect(await shown.json()).toMatchObject({ sizeBytes: packed.length, filename: 'year.csv.gz' });
  });

  it('may hold a zip archive, whose members become the files', async () => {
    const id = await arrive(Uint8Array.from(gzipSync(zipOf([{ name: 'a.csv', content: 'Time,V\n1,2\n' }]))));
    const found = textFiles({ files: await unpacked(id) });
    expect(found.map(({ name }) => name)).toEqual(['year.csv.gz/a.csv']);
    expect((await bytesOf(id, found[0]?.index ?? -1)).toString()).toBe('Time,V\n1,2\n');
  });

  it.each<[string, Uint8Array, RegExp]>([
    ['it is cut short', gzipSync(text).subarray(0, 100_000), /damaged gzip file/],
    ['it holds gzip', gzipSync(gzipSync('Time,V\n1,2\n')), /another gzip file/],
    ['it holds a PDF', gzipSync('%PDF-1.7 and so on'), /a PDF/],
    ['it holds nothing', gzipSync(''), /nothing/],
    ['it grows two hundred times', gzipSync(Buffer.alloc(64 * CHUNK_BYTES, '1,2\n')), /200 times/],
  ])('is refused in words when %s', async (_, bytes, words) => {
    const id = await arrive(Uint8Array.from(bytes));
    await expect(unpacked(id)).rejects.toThrow(words);
  });

  it('is refused when it unpacks to more than the limit of one upload', async () => {
    const id = await arrive(Uint8Array.from(gzipSync(text)));
    process.env.UPLOAD_LIMIT_BYTES = String(CHUNK_BYTES);
    await expect(unpacked(id)).rejects.toThrow(/larger than 1 MB once unpacked/);
  });
});
