import ExcelJS from 'exceljs';
import fc from 'fast-check';
import { beforeAll, describe, expect, it } from 'vitest';
import { TrendError } from '@/lib/trends/types';
import { bareWorkbook, sheetOf, unpack, zipOf } from './container-support';

const LIMIT_BYTES = 1024 * 1024;

/** Either texts or a sentence; anything else thrown is a crash. */
async function settles(bytes: Uint8Array, name: string): Promise<void> {
  try {
    await unpack(bytes, name, LIMIT_BYTES);
  } catch (error) {
    if (!(error instanceof TrendError)) throw error;
    expect(error.message).toMatch(/^[A-Z"].*\.$/s);
  }
}

const archive = zipOf([
  { name: 'a.csv', content: 'Time,V\n1,2\n'.repeat(40) },
  { name: 'in/b.csv', content: 'Time,V\n3,4\n', stored: true },
]);
const archive64 = zipOf([{ name: 'a.csv', content: 'Time,V\n1,2\n'.repeat(9) }], true);
let workbook: Buffer;

beforeAll(async () => {
  const book = new ExcelJS.Workbook();
  const sheet = book.addWorksheet('Trend');
  sheet.addRows([
    ['Time', 'V'],
    [new Date(0), 1],
    ['text', true],
  ]);
  workbook = Buffer.from(await book.xlsx.writeBuffer());
});

const mutations = fc.array(
  fc.record({
    at: fc.double({ min: 0, max: 0.9999999, noNaN: true }),
    value: fc.oneof(fc.integer({ min: 0, max: 255 }), fc.constantFrom(0, 255)),
    kind: fc.constantFrom('set', 'set', 'set', 'drop', 'insert', 'cut'),
  }),
  { minLength: 1, maxLength: 8 },
);

function mutated(original: Buffer, changes: readonly { at: number; value: number; kind: string }[]): Buffer {
  let bytes = Buffer.from(original);
  for (const { at, value, kind } of changes) {
    const index = Math.floor(at * bytes.length);
    if (kind === 'set') bytes[index] = value;
    else if (kind === 'drop') bytes = Buffer.concat([bytes.subarray(0, index), bytes.subarray(index + 1)]);
    else if (kind === 'insert')
      bytes = Buffer.concat([bytes.subarray(0, index), Buffer.of(value), bytes.subarray(index)]);
    else if (at > 0.5) bytes = bytes.subarray(0, index);
  }
  return bytes;
}

describe('no byte string crashes or hangs the unpacking', () => {
  it('random bytes, with and without the mark of a zip archive', { timeout: 60_000 }, async () => {
    await fc.assert(
      fc.asyncProperty(fc.uint8Array({ maxLength: 3000 }), fc.boolean(), (bytes, marked) =>
        settles(marked ? Buffer.concat([Buffer.from('PK\u0003\u0004'), bytes]) : bytes, 'drop.zip'),
      ),
      { numRuns: 1500 },
    );
  });

  it('archives with bytes changed, left out, put in and cut off', { timeout: 120_000 }, async () => {
    await fc.assert(
      fc.asyncProperty(mutations, fc.boolean(), (changes, long) =>
        settles(mutated(long ? archive64 : archive, changes), 'drop.zip'),
      ),
      { numRuns: 3000 },
    );
  });

  it('every byte of an archive, one at a time, made 0, 255 and its own opposite', { timeout: 120_000 }, async () => {
    for (let at = 0; at < archive64.length; at++) {
      for (const value of [0, 255, ~(archive64[at] ?? 0) & 255]) {
        const bytes = Buffer.from(archive64);
        bytes[at] = value;
        await settles(bytes, 'drop.zip');
      }
    }
  });

  it('workbooks with bytes changed', { timeout: 120_000 }, async () => {
    await fc.assert(
      fc.asyncProperty(mutations, (changes) => settles(mutated(workbook, changes), 'book.xlsx')),
      { numRuns: 600 },
    );
  });

  it('sheets whose XML has been changed inside an archive that is sound', { timeout: 120_000 }, async () => {
    const xml = Buffer.from(
      sheetOf(
        '<row r="1"><c r="A1" t="inlineStr"><is><t>a&amp;b</t></is></c><c r="C1" s="0"><v>1.5</v></c></row><row r="3"/>',
      ),
    );
    await fc.assert(
      fc.asyncProperty(mutations, (changes) =>
        settles(bareWorkbook(mutated(xml, changes).toString('latin1')), 'book.xlsx'),
      ),
      { numRuns: 1500 },
    );
  });
});
