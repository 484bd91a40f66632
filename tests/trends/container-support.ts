import { deflateRawSync } from 'node:zlib';
import type { ChunkSource } from '@/lib/containers/chunked-bytes';
import { crc32 } from '@/lib/containers/crc32';
import { UnpackBudget } from '@/lib/containers/unpack-budget';
import { unpackContainer, type MemberSink } from '@/lib/containers/unpack-container';
import type { TrendProblem } from '@/lib/trends/types';

export interface ZipPart {
  name: string | Uint8Array;
  content: string | Uint8Array;
  /** Stored as it is instead of deflated. */
  stored?: boolean;
  flags?: number;
  method?: number;
  crc?: number;
  /** What the archive says the size is. */
  size?: number;
  /** Unix mode, such as 0o120777 of a link. */
  mode?: number;
  /** Points at the bytes of an earlier part instead of having its own. */
  sameBytesAs?: number;
}

/** A zip archive byte by byte, so that every field can be made wrong. */
export function zipOf(parts: readonly ZipPart[], zip64 = false): Buffer {
  const body: Buffer[] = [];
  const directory: Buffer[] = [];
  const offsets: number[] = [];
  let at = 0;
  for (const part of parts) {
    const name = Buffer.from(part.name);
    const content = Buffer.from(part.content);
    const data = part.stored === true ? content : deflateRawSync(content);
    const header = Buffer.alloc(30);
    header.writeUInt32LE(0x04034b50, 0);
    const common = Buffer.alloc(22);
    common.writeUInt16LE(zip64 ? 45 : 20, 0);
    common.writeUInt16LE(part.flags ?? 0x800, 2);
    common.writeUInt16LE(part.method ?? (part.stored === true ? 0 : 8), 4);
    common.writeUInt32LE(part.crc ?? crc32(content), 10);
    common.writeUInt32LE(zip64 ? 0xffffffff : data.length, 14);
    common.writeUInt32LE(zip64 ? 0xffffffff : (part.size ?? content.length), 18);
    common.copy(header, 4);
    header.writeUInt16LE(name.length, 26);
    const offset = part.sameBytesAs === undefined ? at : (offsets[part.sameBytesAs] ?? 0);
    offsets.push(offset);
    if (part.sameBytesAs === undefined) {
      body.push(header, name, data);
      at += header.length + name.length + data.length;
    }
    const extra = zip64 ? Buffer.alloc(20) : Buffer.alloc(0);
    if (zip64) {
      extra.writeUInt16LE(1, 0);
      extra.writeUInt16LE(16, 2);
      extra.writeBigUInt64LE(BigInt(part.size ?? content.length), 4);
      extra.writeBigUInt64LE(BigInt(data.length), 12);
    }
    const entry = Buffer.alloc(46);
    entry.writeUInt32LE(0x02014b50, 0);
    entry.writeUInt16LE(part.mode === undefined ? 20 : 0x0314, 4);
    common.copy(entry, 6);
    entry.writeUInt16LE(name.length, 28);
    entry.writeUInt16LE(extra.length, 30);
    entry.writeUInt32LE((part.mode ?? 0) * 0x10000, 38);
    entry.writeUInt32LE(offset, 42);
    directory.push(entry, name, extra);
  }
  const list = Buffer.concat(directory);
  const tail: Buffer[] = [];
  if (zip64) {
    const record = Buffer.alloc(56);
    record.writeUInt32LE(0x06064b50, 0);
    record.writeBigUInt64LE(44n, 4);
    record.writeBigUInt64LE(BigInt(parts.length), 24);
    record.writeBigUInt64LE(BigInt(parts.length), 32);
    record.writeBigUInt64LE(BigInt(list.length), 40);
    record.writeBigUInt64LE(BigInt(at), 48);
    const locator = Buffer.alloc(20);
    locator.writeUInt32LE(0x07064b50, 0);
    locator.writeBigUInt64LE(BigInt(at + list.length), 8);
    locator.writeUInt32LE(1, 16);
    tail.push(record, locator);
  }
  const end = Buffer.alloc(22);
  end.writeUInt32LE(0x06054b50, 0);
  end.writeUInt16LE(parts.length, 8);
  end.writeUInt16LE(parts.length, 10);
  end.writeUInt32LE(list.length, 12);
  end.writeUInt32LE(zip64 ? 0xffffffff : at, 16);
  return Buffer.concat([...body, list, ...tail, end]);
}

/** Bytes in memory as a stored file; small pieces, so that everything lies across a border. */
export function sourceOf(bytes: Uint8Array, chunkBytes = 700): ChunkSource {
  return {
    sizeBytes: bytes.length,
    chunkBytes,
    readChunk: async (index) =>
      index * chunkBytes < bytes.length ? bytes.subarray(index * chunkBytes, (index + 1) * chunkBytes) : null,
  };
}

export interface Unpacked {
  /** Texts by name, in the order they were kept. */
  texts: Record<string, string>;
  problems: TrendProblem[];
  /** What was begun and neither kept nor discarded. */
  open: string[];
}

/** Unpacks into memory. */
export async function unpack(
  bytes: Uint8Array,
  name = 'drop.zip',
  limitBytes = 64 * 1024 * 1024,
  storedBytes = 0,
): Promise<Unpacked> {
  const texts: Record<string, string> = {};
  const open = new Set<string>();
  const sink: MemberSink = {
    begin: (member) => {
      const parts: Buffer[] = [];
      open.add(member);
      return {
        write: async (piece) => void parts.push(Buffer.from(piece)),
        keep: async () => {
          open.delete(member);
          texts[member] = Buffer.concat(parts).toString('utf8');
        },
        reopen: async () => sourceOf(Buffer.concat(parts)),
        discard: async () => void open.delete(member),
      };
    },
  };
  const chunkBytes = bytes.length > 100_000 ? 1 << 16 : 700;
  const problems = await unpackContainer(
    sourceOf(bytes, chunkBytes),
    name,
    sink,
    new UnpackBudget(limitBytes, storedBytes),
  );
  return { texts, problems, open: [...open] };
}

const WORKBOOK_XML = (sheets: string): string => `<workbook xmlns:r="http://r"><sheets>${sheets}</sheets></workbook>`;

/** The least workbook around one sheet's XML, with further parts or changed ones. */
export function bareWorkbook(sheetXml: string, parts: readonly ZipPart[] = []): Buffer {
  const given = new Set(parts.map(({ name }) => String(name)));
  const usual: ZipPart[] = [
    { name: '[Content_Types].xml', content: '<Types/>' },
    { name: 'xl/workbook.xml', content: WORKBOOK_XML('<sheet name="Sheet1" sheetId="1" r:id="rId1"/>') },
    {
      name: 'xl/_rels/workbook.xml.rels',
      content:
        '<Relationships><Relationship Id="rId1" Type="http://x/relationships/worksheet" Target="worksheets/sheet1.xml"/></Relationships>',
    },
    { name: 'xl/worksheets/sheet1.xml', content: sheetXml },
  ];
  return zipOf([...usual.filter(({ name }) => !given.has(String(name))), ...parts]);
}

export const sheetOf = (rows: string): string => `<worksheet><sheetData>${rows}</sheetData></worksheet>`;
