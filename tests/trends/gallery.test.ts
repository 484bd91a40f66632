import { readdirSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { fixtures, PACKED } from '@/fixtures/trends/shapes';
import { EXPORT_SHAPES } from '@/lib/trends/gallery';
import {
  decisions,
  dialectOf,
  differences,
  FOLDER,
  fixtureBytes,
  keyOf,
  missingOf,
  previewTexts,
  readConfirmed,
  textsOf,
  type TextFile,
} from './gallery-support';

// Every shape that the page lists, as a file: the same invented record (fixtures/trends/truth.json) in another dress.
const FIXTURES = fixtures();

async function textsOfShape(id: string): Promise<TextFile[]> {
  const names = Object.keys(FIXTURES[id]!.files);
  return (await Promise.all(names.map((name) => textsOf(name, fixtureBytes(name))))).flat();
}

// Piece by piece: at once, the platform takes Windows-1252 for Latin-1.
const decoded = (texts: readonly TextFile[], encoding: string): string =>
  texts
    .map(({ bytes }) => new TextDecoder(encoding).decode(bytes, { stream: true }).replace(/\r\n?/g, '\n'))
    .join('\n');

test('the listed shapes and the fixtures are the same, and no file is without a shape', () => {
  expect(EXPORT_SHAPES.map(({ id }) => id)).toEqual([...new Set(EXPORT_SHAPES.map(({ id }) => id))]);
  expect(Object.keys(FIXTURES).sort()).toEqual(EXPORT_SHAPES.map(({ id }) => id).sort());
  const files = readdirSync(FOLDER, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile() && entry.name !== '.gitattributes')
    .map((entry) => path.relative(FOLDER, path.join(entry.parentPath, entry.name)));
  expect(files.sort()).toEqual(
    Object.values(FIXTURES)
      .flatMap((each) => Object.keys(each.files))
      .sort(),
  );
});

test('the files are what their writer writes', () => {
  for (const [id, { files }] of Object.entries(FIXTURES)) {
    if (PACKED.includes(id)) continue;
    for (const [name, bytes] of Object.entries(files)) {
      expect(Buffer.compare(fixtureBytes(name), bytes), `${name}: run fixtures/trends/write-files.ts`).toBe(0);
    }
  }
});

describe.each(EXPORT_SHAPES)('$id: $shape', ({ id, example, asks }) => {
  const fixture = FIXTURES[id]!;
  const { record, dress, form, stamps, says, leftOut = {} } = fixture;

  test('its numbers are read as they are, and what must be said is said', async () => {
    const texts = await textsOfShape(id);
    const read = readConfirmed(texts, previewTexts(texts), dress.stepMs / 60_000);
    const shiftMs = stamps === 'end' ? -dress.stepMs : 0;
    expect(differences(record, dress, read, missingOf(fixture), shiftMs)).toEqual([]);
    const codes = read.problems.map(({ code }) => code);
    for (const code of says) expect(codes).toContain(code);
  });

  test('its dialect, times, roles and units are recognised', async () => {
    const preview = previewTexts(await textsOfShape(id));
    expect(preview.dialect).toMatchObject(dialectOf(fixture));
    expect(preview.timestamp).toMatchObject({ form, ...(stamps ? { stamps } : {}) });
    const suggested = preview.columns.filter(({ role }) => role !== 'ignore');
    expect(suggested.map(keyOf).sort()).toEqual(record.columns.map(keyOf).sort());
    for (const { column, confidence, reason } of preview.columns.filter(({ role }) => role === 'ignore')) {
      expect(leftOut[column], column).toBeDefined();
      expect(reason).toContain(leftOut[column]);
      expect(confidence).toBeGreaterThanOrEqual(0.5);
    }
  });

  test(asks === undefined ? 'needs nothing beyond confirming' : `asks ${asks}`, async () => {
    const needed = decisions(previewTexts(await textsOfShape(id)));
    if (asks === undefined) expect(needed).toEqual([]);
    else expect(needed).not.toEqual([]);
  });

  test('the example on the page stands in its file', async () => {
    const text = decoded(await textsOfShape(id), dialectOf(fixture).encoding);
    for (const line of example.split('\n')) expect(text).toContain(line);
  });
});

describe('all shapes together', () => {
  test('at least nine in ten are read right with nothing beyond confirming', async () => {
    let free = 0;
    for (const { id } of EXPORT_SHAPES) {
      const fixture = FIXTURES[id]!;
      const { record, dress, stamps } = fixture;
      const texts = await textsOfShape(id);
      try {
        const preview = previewTexts(texts);
        const read = readConfirmed(texts, preview, dress.stepMs / 60_000);
        const shiftMs = stamps === 'end' ? -dress.stepMs : 0;
        const wrong = differences(record, dress, read, missingOf(fixture), shiftMs);
        if (decisions(preview).length === 0 && wrong.length === 0) free++;
      } catch {
        // Not read at all: its own tests say why.
      }
    }
    process.stdout.write(`Trend exports: ${free} of ${EXPORT_SHAPES.length} shapes need nothing beyond confirming.\n`);
    expect(free / EXPORT_SHAPES.length).toBeGreaterThanOrEqual(0.9);
  }, 60_000);
});
