import { gzipSync } from 'node:zlib';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { POST as postUpload } from '@/app/api/v1/plants/[plantId]/uploads/route';
import { readChunk } from '@/lib/commands/import-source';
import { CHUNK_BYTES } from '@/lib/db/chunks';
import { zipOf } from '../trends/container-support';
import { send, setScene, type Scene } from './data-scene';

let scene: Scene;
beforeAll(async () => {
  scene = await setScene();
});
afterAll(() => scene.api.close());

const post = (body: BodyInit, type?: string) =>
  send(postUpload, 'POST', {
    path: `/plants/${scene.plantId}/uploads?filename=drop.zip`,
    params: { plantId: scene.plantId },
    cookie: scene.engineer.cookie,
    body,
    headers: type === undefined ? {} : { 'content-type': type },
  });

function form(name: string, content: Uint8Array): FormData {
  const data = new FormData();
  data.append('file', new File([Uint8Array.from(content)], name));
  return data;
}

async function storedBytes(uploadId: string): Promise<Buffer> {
  const parts: Uint8Array[] = [];
  for (let seq = 0; ; seq++) {
    const part = await readChunk(scene.organizationId, uploadId, 0, seq);
    if (!part) return Buffer.concat(parts);
    parts.push(part);
  }
}

const archive = zipOf([{ name: 'a.csv', content: 'Time,V\n' + '1,2\n'.repeat(400_000), stored: true }]);

describe('a zip archive or a workbook', () => {
  it.each([
    ['in a form', () => post(form('week.xlsx', archive))],
    ['as a body of type application/zip', () => post(Uint8Array.from(archive), 'application/zip')],
    [
      "as a body of a workbook's type",
      () => post(Uint8Array.from(archive), 'application/vnd.openxmlformats-officedocument.spreadsheetml.sheet'),
    ],
    ['packed in gzip', () => post(Uint8Array.from(gzipSync(archive)), 'application/gzip')],
  ])('is received %s and kept byte by byte as it is', async (_, sent) => {
    expect(archive.length).toBeGreaterThan(CHUNK_BYTES);
    const response = await sent();
    expect(response.status).toBe(202);
    const { id } = (await response.json()) as { id: string };
    expect((await storedBytes(id)).equals(archive)).toBe(true);
  });

  it.each<[string, Uint8Array, string]>([
    ['an empty one', zipOf([]), 'is an empty ZIP file'],
    ['one part of a split one', Uint8Array.of(0x50, 0x4b, 7, 8, 0x50, 0x4b, 3, 4), 'is one part of a split ZIP file'],
    [
      'an old workbook',
      Uint8Array.of(0xd0, 0xcf, 0x11, 0xe0, 0xa1, 0xb1),
      'is an old or a password-protected spreadsheet workbook',
    ],
    ['a PDF', Buffer.from('%PDF-1.7 and so on'), 'is a PDF'],
    ['a 7z file', Uint8Array.of(0x37, 0x7a, 0xbc, 0xaf, 0x27, 0x1c), 'is a 7z file'],
    ['a RAR file', Buffer.from('Rar!\u001a\u0007\u0001'), 'is a RAR file'],
    ['gzip in gzip', gzipSync(gzipSync('Time,V\n1,2\n')), 'holds another gzip file'],
  ])('is told apart from %s, which is refused in words', async (_, content, words) => {
    const response = await post(form('drop.bin', content));
    expect(response.status).toBe(415);
    expect(await response.json()).toMatchObject({ detail: expect.stringContaining(words) as string });
  });
});
