import { gzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import { crc32, crc32ByTable } from '@/lib/containers/crc32';
import { UnpackBudget } from '@/lib/containers/unpack-budget';
import { unpackContainer } from '@/lib/containers/unpack-container';
import { TrendError } from '@/lib/trends/types';
import { bareWorkbook, sheetOf, unpack, zipOf, type ZipPart } from './container-support';

const CSV = 'Time,CHWS F\n2026-01-01 00:00,44.1\n2026-01-01 00:15,44.2\n';
const csv = (name: string | Uint8Array, more: Partial<ZipPart> = {}): ZipPart => ({ name, content: CSV, ...more });

const refusal = async (bytes: Uint8Array, limitBytes?: number): Promise<TrendError> => {
  const error: unknown = await unpack(bytes, 'drop.zip', limitBytes).catch((thrown: unknown) => thrown);
  expect(error).toBeInstanceOf(TrendError);
  return error as TrendError;
};

describe('a zip archive', () => {
  it('becomes its members, deflated, stored and packed in gzip, in the order it lists them', async () => {
    const long = CSV.repeat(5000);
    const { texts, problems, open } = await unpack(
      zipOf([
        csv('b.csv'),
        csv('year/jan/a.csv', { stored: true }),
        { name: 'c.csv.gz', content: gzipSync(CSV + 'x') },
        { name: 'long.csv', content: long },
      ]),
    );
    expect(Object.entries(texts)).toEqual([
      ['drop.zip/b.csv', CSV],
      ['drop.zip/year/jan/a.csv', CSV],
      ['drop.zip/c.csv.gz', CSV + 'x'],
      ['drop.zip/long.csv', long],
    ]);
    expect(problems).toEqual([]);
    expect(open).toEqual([]);
  });

  it('is read in the zip64 form as well', async () => {
    expect((await unpack(zipOf([csv('a.csv'), csv('b.csv')], true))).texts).toEqual({
      'drop.zip/a.csv': CSV,
      'drop.zip/b.csv': CSV,
    });
  });

  it('loses what is no trend text, and each kind of it is told once', async () => {
    const { texts, problems } = await unpack(
      zipOf([
        csv('folder/', { content: '' }),
        csv('folder/a.csv'),
        { name: '__MACOSX/folder/._a.csv', content: 'x' },
        { name: '.DS_Store', content: 'x' },
        { name: 'chart.png', content: 'x' },
        { name: 'manual.PDF', content: 'x' },
        { name: 'docs/README.txt', content: 'Made by hand.' },
        { name: 'empty.csv', content: '' },
        { name: 'latest.csv', content: 'folder/a.csv', mode: 0o120777 },
        { name: 'picture.csv', content: Uint8Array.of(0x89, 0x50, 0x4e, 0x47, 1, 2) },
        { name: 'old.xls', content: Uint8Array.of(0xd0, 0xcf, 0x11, 0xe0, 1, 2) },
        { name: 'noise.dat', content: Uint8Array.from({ length: 2000 }, (_, i) => ((i * 7919) % 251) & 0x1f) },
      ]),
    );
    expect(Object.keys(texts)).toEqual(['drop.zip/folder/a.csv']);
    expect(problems.map(({ message, count }) => [message, count])).toEqual([
      [
        '"drop.zip": "__MACOSX/folder/._a.csv", ".DS_Store" not read, because each is left there by an operating system.',
        2,
      ],
      [
        '"drop.zip": "chart.png", "manual.PDF", "docs/README.txt" not read, because each is by its name no trend log.',
        3,
      ],
      ['"drop.zip": "empty.csv" not read, because it is empty.', 1],
      ['"drop.zip": "latest.csv" not read, because it is a link to another file.', 1],
      ['"drop.zip": "picture.csv" not read, because it is a picture.', 1],
      ['"drop.zip": "old.xls" not read, because it is an old spreadsheet workbook (xls).', 1],
      ['"drop.zip": "noise.dat" not read, because it is no text.', 1],
    ]);
    expect(problems.every(({ severity }) => severity === 'warning')).toBe(true);
  });

  it('gives its members names that lead nowhere, each its own, of 255 characters at the most', async () => {
    const names = [
      '../../etc/passwd.csv',
      '/root/a.csv',
      'C:\\logs\\b.csv',
      'line\nbreak\u202e\u0000.csv',
      '<img src=x>.csv',
      `${'long/'.repeat(80)}end.csv`,
      'twice.csv',
      'twice.csv',
      '..',
    ];
    const { texts } = await unpack(zipOf(names.map((name) => csv(name))));
    const given = Object.keys(texts);
    expect(given.slice(0, 5)).toEqual([
      'drop.zip/etc/passwd.csv',
      'drop.zip/root/a.csv',
      'drop.zip/logs/b.csv',
      'drop.zip/linebreak.csv',
      'drop.zip/<img src=x>.csv',
    ]);
    expect(given[5]).toMatch(/^drop\.zip\/.*long\/end\.csv$/);
    expect(given.slice(6)).toEqual(['drop.zip/twice.csv', 'drop.zip/twice.csv (2)', 'drop.zip/unnamed']);
    expect(Math.max(...given.map((name) => name.length))).toBe(255);
  });

  it('has names in UTF-8, with and without the mark, and in code page 437', async () => {
    const { texts } = await unpack(
      zipOf([
        csv('Kühler.csv'),
        csv('Wärme.csv', { flags: 0 }),
        csv(Uint8Array.of(0x4b, 0x81, 0x68, 0x6c, 0x2e, 0x63, 0x73, 0x76), { flags: 0 }),
      ]),
    );
    expect(Object.keys(texts)).toEqual(['drop.zip/Kühler.csv', 'drop.zip/Wärme.csv', 'drop.zip/Kühl.csv']);
  });
});

describe('a zip archive that is refused in words', () => {
  it.each<[string, Buffer, RegExp]>([
    ['encrypted', zipOf([csv('a.csv'), csv('b.csv', { flags: 0x801 })]), /^"drop\.zip\/b\.csv" is encrypted/],
    ['strongly encrypted', zipOf([csv('b.csv', { flags: 0x841 })]), /^"drop\.zip" is encrypted/],
    [
      'another method',
      zipOf([csv('b.csv', { method: 14 })]),
      /^"drop\.zip\/b\.csv" is packed by a method \(number 14\)/,
    ],
    ['a wrong checksum', zipOf([csv('b.csv', { crc: 1 })]), /^"drop\.zip\/b\.csv" is damaged: its checksum is wrong/],
    ['shorter than it says', zipOf([csv('b.csv', { size: 60 })]), /is damaged: it is shorter/],
    ['longer than it says', zipOf([csv('b.csv', { size: 20 })]), /is damaged: it is longer/],
    ['cut short', zipOf([csv('a.csv'), csv('b.csv')]).subarray(0, 150), /^"drop\.zip" is a damaged zip archive/],
    ['nothing but a head', Buffer.from('PK\u0003\u0004'), /damaged zip archive/],
    [
      'a damaged gzip member',
      zipOf([{ name: 'a.csv.gz', content: gzipSync(CSV.repeat(99)).subarray(0, 60) }]),
      /"drop\.zip\/a\.csv\.gz" is a damaged gzip file/,
    ],
    [
      'an archive in an archive',
      zipOf([{ name: 'in.zip', content: zipOf([csv('a.csv')]) }]),
      /"drop\.zip\/in\.zip" is a zip archive inside a zip archive/,
    ],
    ['no text at all', zipOf([{ name: 'a.png', content: 'x' }]), /holds no text .*"a\.png" not read/],
    [
      'an OpenDocument sheet',
      zipOf([
        { name: 'mimetype', content: 'x' },
        { name: 'content.xml', content: 'x' },
      ]),
      /is an OpenDocument file/,
    ],
    ['a binary workbook', zipOf([{ name: 'xl/workbook.bin', content: 'x' }]), /binary workbook \(xlsb\)/],
    [
      'a letter',
      zipOf([
        { name: '[Content_Types].xml', content: 'x' },
        { name: 'word/document.xml', content: 'x' },
      ]),
      /office document that is no workbook/,
    ],
  ])('%s', async (_, bytes, words) => {
    expect((await refusal(bytes)).message).toMatch(words);
  });

  it('a split one', async () => {
    const bytes = zipOf([csv('a.csv')]);
    bytes.writeUInt16LE(1, bytes.length - 18);
    expect((await refusal(bytes)).message).toMatch(/one part of a split zip archive/);
  });
});

describe('a bomb', () => {
  const zeros = (megabytes: number): Buffer => Buffer.alloc(megabytes * 1024 * 1024, '0');

  it('of a member that unpacks to a thousand times its size is refused before it is unpacked', async () => {
    const { message } = await refusal(zipOf([{ name: 'a.csv', content: zeros(20) }]));
    expect(message).toMatch(/^"drop\.zip\/a\.csv" unpacks to more than 200 times its packed size/);
  });

  it('that lies about its size is refused where it exceeds what it said', async () => {
    const { message } = await refusal(zipOf([{ name: 'a.csv', content: zeros(20), size: 1000 }]));
    expect(message).toMatch(/it is longer than the archive says/);
  });

  it('of gzip inside is refused', async () => {
    const { message } = await refusal(zipOf([{ name: 'a.csv.gz', content: gzipSync(zeros(20)) }]));
    expect(message).toMatch(/more than 200 times/);
  });

  it('of many members within the ratio is refused at the limit of one upload', async () => {
    const parts = Array.from({ length: 20 }, (_, i) => ({ name: `${i}.csv`, content: zeros(1) }));
    expect((await refusal(zipOf(parts), 10 * 1024 * 1024)).message).toMatch(/larger than 10 MB once unpacked/);
  });

  it('counts the text that the upload holds already', async () => {
    const bytes = zipOf([csv('a.csv')]);
    await expect(unpack(bytes, 'drop.zip', 1000, 990)).rejects.toThrow(/larger than 1000 bytes once unpacked/);
    await expect(unpack(bytes, 'drop.zip', 1000, 900)).resolves.toMatchObject({ open: [] });
  });

  it('of members that share their bytes is refused', async () => {
    const { message } = await refusal(zipOf([csv('a.csv'), csv('b.csv', { sameBytesAs: 0 })]));
    expect(message).toMatch(/two of its members share the same bytes/);
  });

  it('of workbooks whose sheets come to more than 2,000 files is refused', { timeout: 30_000 }, async () => {
    const sheets = Array.from({ length: 499 }, (_, i) => `<sheet name="S${i}" sheetId="${i}" r:id="rId1"/>`).join('');
    const book = bareWorkbook(sheetOf('<row><c><v>1</v></c></row>'.repeat(2)), [
      { name: 'xl/workbook.xml', content: `<workbook xmlns:r="r"><sheets>${sheets}</sheets></workbook>` },
    ]);
    const parts = Array.from({ length: 5 }, (_, i) => ({ name: `${i}.xlsx`, content: book, stored: true }));
    expect((await refusal(zipOf(parts))).message).toMatch(/more than 2,000 files once unpacked/);
  });

  it('of more than 2,000 members is refused', async () => {
    const parts = Array.from({ length: 2001 }, (_, i) => csv(`${i}.csv`));
    expect((await refusal(zipOf(parts))).message).toMatch(/has 2,001 members; up to 2,000 are read/);
  });
});

describe('the store of the bytes', () => {
  it('is not blamed on the file when it fails', async () => {
    const bytes = zipOf([{ name: 'a.csv', content: 'Time,V\n'.repeat(1200), stored: true }]);
    for (const failing of [0, 3, Math.floor(bytes.length / 500)]) {
      const gone = new Error('the database is away');
      const source = {
        sizeBytes: bytes.length,
        chunkBytes: 500,
        readChunk: async (index: number) => {
          if (index === failing) throw gone;
          return bytes.subarray(index * 500, (index + 1) * 500);
        },
      };
      const writer = { write: async () => undefined, keep: async () => undefined, discard: async () => undefined };
      const sink = { begin: () => ({ ...writer, reopen: async () => source }) };
      await expect(unpackContainer(source, 'a.zip', sink, new UnpackBudget(1e9))).rejects.toBe(gone);
    }
  });

  it('is checked by a CRC-32 that is the same by table and built in, in pieces', () => {
    const bytes = Uint8Array.from({ length: 5000 }, (_, i) => (i * 31) ^ (i >> 3));
    for (const crc of [crc32, crc32ByTable]) {
      expect(crc(Buffer.from('123456789'))).toBe(0xcbf43926);
      expect(crc(bytes.subarray(77), crc(bytes.subarray(0, 77)))).toBe(crc32ByTable(bytes));
    }
  });
});
