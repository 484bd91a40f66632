import { existsSync, readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { fixtures, PACKED } from '@/fixtures/trends/shapes';
import { createTrendReader, TrendError, type ReadPlan } from '@/lib/trends';
import { confirmedPlan, fixtureBytes, previewTexts, textsOf } from './gallery-support';

const DATA = path.resolve(import.meta.dirname, '../../../shared/data/messy_csv');
/** A file of a few kilobytes is read in milliseconds; this long is a hang. */
const LONGEST_MS = 5000;

/**
 * Previews and reads bytes as a file. Passes when that works or is refused with a TrendError in words; throws what else is
 * thrown. Every number that comes out is finite, and there are no more rows than lines.
 */
function survive(bytes: Uint8Array, plans: readonly ReadPlan[] = []): 'read' | 'refused' {
  const startMs = performance.now();
  let outcome: 'read' | 'refused' = 'refused';
  try {
    const preview = previewTexts([{ name: 'a.csv', bytes }]);
    const suggested = preview.tables.map((_, table) => confirmedPlan(preview, table, 5));
    for (const plan of suggested) readWith(plan, bytes);
    outcome = 'read';
  } catch (error) {
    expectRefusal(error);
  }
  for (const plan of plans) {
    try {
      readWith(plan, bytes);
    } catch (error) {
      expectRefusal(error);
    }
  }
  expect(performance.now() - startMs).toBeLessThan(LONGEST_MS);
  return outcome;
}

function expectRefusal(error: unknown): void {
  if (!(error instanceof TrendError)) throw error;
  expect(error.message).toMatch(/^["A-Z].*\.$/su);
}

function readWith(plan: ReadPlan, bytes: Uint8Array): void {
  const reader = createTrendReader(plan);
  const days = [];
  for (let at = 0; at < bytes.length; at += 1500) {
    reader.push(bytes.subarray(at, at + 1500));
    days.push(...reader.takeOldestDays(2));
  }
  days.push(...reader.finish());
  const report = reader.report();
  let lines = 1;
  for (const byte of bytes) if (byte === 10 || byte === 13) lines++;
  expect(report.rowsRead).toBeLessThanOrEqual(2 * lines);
  for (const { day, values } of days) {
    expect(day).toMatch(/^\d{4}-\d\d-\d\d$/);
    for (const value of values) expect(value === value && !Number.isFinite(value)).toBe(false);
  }
}

const TEXTS = Object.entries(fixtures())
  .filter(([id]) => !PACKED.includes(id))
  .flatMap(([, { files }]) => Object.keys(files).map((name) => fixtureBytes(name)));
const texts = fc.constantFrom(...TEXTS);

/** Pieces that programs and broken disks put into files. */
const PIECES = [
  '\0\0\0\0',
  '"',
  '""',
  '\r',
  '\n',
  ',',
  ';',
  '\t',
  '|',
  '{',
  '}',
  '\ufeff',
  '\u2028',
  '1e999',
  '-1e-400',
  '9'.repeat(400),
  '0x1F',
  '00/00/0000 00:00',
  '12/31/9999 24:00',
  '02/29/2025 00:00',
  '-0',
  '=CMD()',
  '\ud800',
  'log-disabled',
  'Timestamp,Point,Value',
  '((((((((((((((((((((',
  ' '.repeat(300),
  '٣٤٫٥',
];

type Edit =
  | { kind: 'insert'; at: number; piece: string }
  | { kind: 'drop'; at: number; length: number }
  | { kind: 'byte'; at: number; value: number }
  | { kind: 'again'; at: number; length: number };
const at = fc.double({ min: 0, max: 1, noNaN: true });
const edits: fc.Arbitrary<Edit[]> = fc.array(
  fc.oneof(
    fc.record({ kind: fc.constant('insert' as const), at, piece: fc.constantFrom(...PIECES) }),
    fc.record({ kind: fc.constant('drop' as const), at, length: fc.integer({ min: 1, max: 200 }) }),
    fc.record({ kind: fc.constant('byte' as const), at, value: fc.integer({ min: 0, max: 255 }) }),
    fc.record({ kind: fc.constant('again' as const), at, length: fc.integer({ min: 1, max: 300 }) }),
  ),
  { minLength: 1, maxLength: 6 },
);

function edited(bytes: Uint8Array, all: readonly Edit[]): Uint8Array {
  let text = Buffer.from(bytes);
  for (const edit of all) {
    const place = Math.floor(edit.at * text.length);
    const [before, after] = [text.subarray(0, place), text.subarray(place)];
    if (edit.kind === 'insert') text = Buffer.concat([before, Buffer.from(edit.piece), after]);
    else if (edit.kind === 'drop') text = Buffer.concat([before, after.subarray(edit.length)]);
    else if (edit.kind === 'again') text = Buffer.concat([before, after.subarray(0, edit.length), after]);
    else text = Buffer.concat([before, Buffer.from([edit.value]), after.subarray(1)]);
  }
  return text;
}

describe('no bytes crash the importer: each file is read or refused in words', () => {
  test('random bytes', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 600 }), (bytes) => void survive(bytes)),
      { numRuns: 2000 },
    );
  }, 60_000);

  test('random texts of the characters that tables are made of', () => {
    const characters = fc.constantFrom(...'0123456789 :/.-,;\t|"\n\r{}%eEaFnN\u00b0'.split(''));
    const text = fc.array(characters, { maxLength: 400 }).map((all) => Buffer.from(all.join('')));
    fc.assert(
      fc.property(text, (bytes) => void survive(bytes)),
      { numRuns: 2000 },
    );
  }, 60_000);

  test('random tables under a heading', () => {
    const cell = fc.oneof(
      fc.constantFrom(...PIECES, '', 'Bad', 'on', '44.1', '1,5', '07/20/2026 06:05', '06:05', '46223.25', '1784541600'),
      fc.double().map(String),
      fc.string({ maxLength: 8 }),
    );
    const table = fc
      .array(fc.array(cell, { minLength: 1, maxLength: 4 }), { minLength: 2, maxLength: 12 })
      .map((rows) => Buffer.from(`Time,Point,Value\n${rows.map((cells) => cells.join(',')).join('\n')}`));
    fc.assert(
      fc.property(table, (bytes) => void survive(bytes)),
      { numRuns: 2000 },
    );
  }, 60_000);

  test('fixtures with pieces inserted, lost, doubled and bytes changed, also under the plan of the whole file', () => {
    const plans = new Map(
      TEXTS.map((bytes) => {
        const preview = previewTexts([{ name: 'a.csv', bytes }]);
        return [bytes, preview.tables.map((_, table) => confirmedPlan(preview, table, 5))];
      }),
    );
    fc.assert(
      fc.property(texts, edits, (bytes, all) => void survive(edited(bytes, all), plans.get(bytes))),
      { numRuns: 700 },
    );
  }, 120_000);

  test('fixtures cut short anywhere', () => {
    fc.assert(
      fc.property(texts, at, (bytes, share) => void survive(bytes.subarray(0, Math.floor(share * bytes.length)))),
      { numRuns: 500 },
    );
  }, 60_000);

  test('packed fixtures with bytes changed or cut are unpacked or refused in words', async () => {
    const packed = Object.entries(fixtures())
      .filter(([id]) => PACKED.includes(id) && id !== 'gzip')
      .map(([, { files }]) => Object.keys(files)[0]!);
    await fc.assert(
      fc.asyncProperty(fc.constantFrom(...packed), edits, async (name, all) => {
        try {
          for (const { bytes } of await textsOf(name, edited(fixtureBytes(name), all))) survive(bytes);
        } catch (error) {
          expectRefusal(error);
        }
      }),
      { numRuns: 200 },
    );
  }, 60_000);

  if (!existsSync(DATA)) {
    test('the collection of messy files is not beside the project (shared/data/messy_csv): none was read', () => {
      expect(existsSync(DATA)).toBe(false);
    });
    return;
  }

  const messy = readdirSync(DATA, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => path.join(entry.parentPath, entry.name))
    .sort();

  test('the collection of messy files is there', () => expect(messy.length).toBeGreaterThan(30));

  test.each(messy.map((file) => [path.relative(DATA, file), file]))('%s', (_, file) => {
    survive(readFileSync(file));
  });
});
