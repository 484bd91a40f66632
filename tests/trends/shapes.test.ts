import { describe, expect, test } from 'vitest';
import { createTrendReader, previewDrop, type ReadPlan, type TrendPreview } from '@/lib/trends';
import { monthFirst, OPTIONS, plantDays, previewOf, tableOf } from './preview-support';
import { bytesOf, readText, samplesOf } from './support';

const COLUMNS = { 'CHW Pri Sup Temp (F)': 'tps', 'CHW Pri Ret Temp (F)': 'tpr', 'CHW Sec Flow (gpm)': 'fs' } as const;
type Name = keyof typeof COLUMNS;
const NAMES = Object.keys(COLUMNS) as Name[];
const ROWS = 600;
const MOMENTS = plantDays(ROWS, 5);
const cellOf = (name: Name, i: number) => MOMENTS[i]![COLUMNS[name]].toFixed(2);

/** The plan that confirms a preview's suggestion, for one of its tables. */
function planOf(preview: TrendPreview, table = 0): ReadPlan {
  const { shape, dialect, timestamp, names, stepMinutes } = preview.tables[table]!;
  const columns = names.map(({ cell, column }) => {
    const { role, unit, unitIndex } = preview.columns.find((each) => each.column === column)!;
    return { column: cell, role, unit, unitIndex };
  });
  return {
    shape,
    dialect,
    timestamp,
    timeZone: preview.timeZone,
    columns,
    sourceStepMinutes: stepMinutes,
    stepMinutes: 5,
  };
}

/** What the same content reads to from a wide table: the reference for every other shape. */
const wide = tableOf(Object.fromEntries(NAMES.map((name) => [name, (_: unknown, i: number) => cellOf(name, i)])), {
  rows: ROWS,
});
const reference = (() => {
  const preview = previewOf(wide);
  const read = readText(wide, planOf(preview));
  return new Map(NAMES.map((name, column) => [name, samplesOf(read, column)]));
})();

function expectSame(text: string | Uint8Array, plan: ReadPlan): void {
  const read = readText(text, plan);
  for (const [index, { column }] of plan.columns.entries()) {
    expect(samplesOf(read, index), column).toEqual(reference.get(column as Name));
  }
}

const rowsOf = (lines: readonly string[]) => `${lines.join('\n')}\n`;

describe('a row a reading', () => {
  const byTime = () =>
    MOMENTS.flatMap((_, i) => NAMES.map((name) => `${monthFirst(5 * i)},${name},${cellOf(name, i)},ok`));
  const byPoint = () =>
    NAMES.flatMap((name) => MOMENTS.map((_, i) => `${monthFirst(5 * i)},${name},${cellOf(name, i)},ok`));

  test.each([
    ['in the order of time', byTime],
    ['point after point', byPoint],
  ])('%s gives the same numbers as a column a point, and its points are suggested by name', (_, lines) => {
    const text = rowsOf(['Timestamp,Point,Value,Status', ...lines()]);
    const preview = previewOf(text);
    expect(preview.tables[0]!.shape).toEqual({
      kind: 'long',
      point: 'Point',
      value: 'Value',
      status: 'Status',
      unit: null,
    });
    expect(preview.columns.map(({ column, role, unit }) => [column, role, unit])).toEqual([
      ['CHW Pri Sup Temp (F)', 'primarySupplyTemp', 'degF'],
      ['CHW Pri Ret Temp (F)', 'primaryReturnTemp', 'degF'],
      ['CHW Sec Flow (gpm)', 'secondaryFlow', 'gpm'],
    ]);
    expect(preview.stepMinutes).toBe(5);
    expectSame(text, planOf(preview));
  });

  test('takes the unit from its own column', () => {
    const units = { 'CHW Pri Sup Temp (F)': 'degF', 'CHW Pri Ret Temp (F)': 'degF', 'CHW Sec Flow (gpm)': 'gpm' };
    const lines = MOMENTS.flatMap((_, i) =>
      NAMES.map(
        (name) =>
          `${monthFirst(5 * i)};${name.replace(/ \(.*/, '')};${cellOf(name, i).replace('.', ',')};${units[name]}`,
      ),
    );
    const preview = previewOf(rowsOf(['Zeit;Name;Wert;Einheit', ...lines]));
    expect(preview.tables[0]!.shape).toMatchObject({ kind: 'long', point: 'Name', value: 'Wert', unit: 'Einheit' });
    expect(preview.columns.map(({ unit }) => unit)).toEqual(['degF', 'degF', 'gpm']);
    expect(preview.dialect).toMatchObject({ delimiter: ';', decimal: ',' });
  });

  test('leaves out a reading whose status is bad, and says so', () => {
    const lines = byTime().map((line, i) => (i === 0 ? line.replace(/,ok$/, ',fault') : line));
    const text = rowsOf(['Timestamp,Point,Value,Status', ...lines]);
    const read = readText(text, planOf(previewOf(text)));
    expect(samplesOf(read, 0)[0]![0]).not.toBe(reference.get(NAMES[0]!)![0]![0]);
    expect(read.report.problems).toContainEqual(expect.objectContaining({ code: 'bad-quality', row: 2, count: 1 }));
  });

  test('finds a point that first comes far behind the head', () => {
    const late = MOMENTS.map((_, i) => `${monthFirst(5 * i)},Plant kW,${300 + (i % 7)},ok`);
    const text = rowsOf(['Timestamp,Point,Value,Status', ...byTime(), ...late]);
    expect(previewOf(text).columns.map(({ column }) => column)).toContain('Plant kW');
  });

  test('reports rows of a point that is not mapped, and reads the rest', () => {
    const text = rowsOf(['Timestamp,Point,Value,Status', ...byTime()]);
    const plan = planOf(previewOf(text));
    const read = readText(text, { ...plan, columns: plan.columns.slice(0, 2) });
    expect(read.report.problems).toContainEqual(
      expect.objectContaining({
        code: 'unmapped-point',
        count: ROWS,
        message: expect.stringContaining('"CHW Sec Flow (gpm)"') as string,
      }),
    );
    expect(samplesOf(read, 0)).toEqual(reference.get(NAMES[0]!));
  });

  test('is not seen in a wide table that has a column of words', () => {
    const text = tableOf({
      Mode: (_, i) => (i % 9 ? 'Cooling' : 'Heating'),
      'CHWS F': (m) => m.tps,
      'CHWR F': (m) => m.tpr,
    });
    expect(previewOf(text).tables[0]!.shape).toMatchObject({ kind: 'wide' });
  });

  test('reads the same wherever its bytes are cut', () => {
    const text = rowsOf(['Timestamp,Point,Value,Status', ...byTime()]);
    const plan = planOf(previewOf(text));
    const whole = readText(text, plan);
    for (const cut of [1, 777, 4096]) {
      const parts = readText(text, plan, [cut, cut, cut], 512);
      expect(samplesOf(parts, 2)).toEqual(samplesOf(whole, 2));
    }
  });
});

describe('headings', () => {
  test('of two rows are joined, a group reaching to the next', () => {
    const text = rowsOf([
      ',CHW Primary,,CHW Secondary,',
      'Timestamp,Supply Temp (F),Return Temp (F),Supply Temp (F),Return Temp (F)',
      ...MOMENTS.map((m, i) =>
        [monthFirst(5 * i), m.tps, m.tpr, m.tss, m.tsr]
          .map((cell) => (typeof cell === 'number' ? cell.toFixed(2) : cell))
          .join(','),
      ),
    ]);
    const preview = previewOf(text);
    expect(preview.columns.map(({ column, role }) => [column, role])).toEqual([
      ['CHW Primary Supply Temp (F)', 'primarySupplyTemp'],
      ['CHW Primary Return Temp (F)', 'primaryReturnTemp'],
      ['CHW Secondary Supply Temp (F)', 'secondarySupplyTemp'],
      ['CHW Secondary Return Temp (F)', 'secondaryReturnTemp'],
    ]);
    expect(samplesOf(readText(text, planOf(preview)))).toEqual(reference.get('CHW Pri Sup Temp (F)'));
  });

  test.each([
    ['after', ['Timestamp,CHW Pri Sup Temp,CHW Pri Ret Temp,CHW Sec Flow', ',degF,degF,gpm']],
    ['before', [',degF,degF,gpm', 'Timestamp,CHW Pri Sup Temp,CHW Pri Ret Temp,CHW Sec Flow']],
  ])('have their units in a row %s them', (_, head) => {
    const text = rowsOf([
      ...head,
      ...MOMENTS.map((_, i) => [monthFirst(5 * i), ...NAMES.map((name) => cellOf(name, i))].join(',')),
    ]);
    const preview = previewOf(text);
    expect(preview.columns.map(({ role, unit }) => [role, unit])).toEqual([
      ['primarySupplyTemp', 'degF'],
      ['primaryReturnTemp', 'degF'],
      ['secondaryFlow', 'gpm'],
    ]);
    expect(samplesOf(readText(text, planOf(preview)), 2)).toEqual(reference.get('CHW Sec Flow (gpm)'));
  });

  test('are missing altogether: columns go by their numbers', () => {
    const text = rowsOf(MOMENTS.map((_, i) => [monthFirst(5 * i), ...NAMES.map((name) => cellOf(name, i))].join(',')));
    const preview = previewOf(text);
    expect(preview.dialect).toMatchObject({ headerRow: 0, firstDataRow: 1 });
    expect(preview.columns.map(({ column }) => column)).toEqual(['column 2', 'column 3', 'column 4']);
    const columns = [{ column: 'column 2', role: 'primarySupplyTemp' as const, unit: 'degF' as const }];
    expect(samplesOf(readText(text, { ...planOf(preview), columns }))).toEqual(reference.get('CHW Pri Sup Temp (F)'));
  });

  test('are no upper heading when they only tell of the file', () => {
    const text = rowsOf([
      'Trend report,,,',
      'Site: Pellmarsh,,,',
      'Timestamp,CHWS F,CHWR F,Sec Flow gpm',
      ...MOMENTS.map((m, i) => `${monthFirst(5 * i)},${m.tps.toFixed(2)},${m.tpr.toFixed(2)},${m.fs.toFixed(0)}`),
    ]);
    expect(previewOf(text).dialect).toMatchObject({ headerRow: 3, upperHeaderRow: null });
  });
});

describe('several files in one drop', () => {
  const drop = (files: Record<string, string>) =>
    previewDrop(
      Object.entries(files).map(([name, text]) => ({ name, head: bytesOf(text), complete: true })),
      OPTIONS,
    );
  const pointFile = (name: Name, heading = 'Timestamp,Value') =>
    rowsOf([heading, ...MOMENTS.map((_, i) => `${monthFirst(5 * i)},${cellOf(name, i)}`)]);

  test('one point a file: the points go by the files’ names', () => {
    const files = {
      'export/CHW Pri Sup Temp (F)_20260720.csv': NAMES[0]!,
      'export/CHW Pri Ret Temp (F)_20260720.csv': NAMES[1]!,
      'export/CHW Sec Flow (gpm)_20260720.csv': NAMES[2]!,
    };
    const preview = drop(Object.fromEntries(Object.entries(files).map(([file, name]) => [file, pointFile(name)])));
    expect(preview.columns.map(({ column, role, unit, table }) => [column, role, unit, table])).toEqual([
      ['CHW Pri Sup Temp (F)', 'primarySupplyTemp', 'degF', 0],
      ['CHW Pri Ret Temp (F)', 'primaryReturnTemp', 'degF', 1],
      ['CHW Sec Flow (gpm)', 'secondaryFlow', 'gpm', 2],
    ]);
    Object.values(files).forEach((name, table) => {
      const read = readText(pointFile(name), planOf(preview, table));
      expect(samplesOf(read)).toEqual(reference.get(name));
    });
  });

  test('one point a file with the point named above the heading', () => {
    const named = (name: Name) => `Point:,${name}\n${pointFile(name)}`;
    const preview = drop({ 'trend1.csv': named(NAMES[0]!), 'trend2.csv': named(NAMES[2]!) });
    expect(preview.columns.map(({ column }) => column)).toEqual([NAMES[0], NAMES[2]]);
  });

  test('one heading cut into months is one table', () => {
    const half = (from: number, to: number) =>
      rowsOf([wide.split('\n')[0]!, ...wide.split('\n').slice(1 + from, 1 + to)]);
    const preview = drop({ '2026-07.csv': half(0, 300), '2026-08.csv': half(300, 600) });
    expect(preview.tables).toHaveLength(1);
    expect(preview.tables[0]!.files).toEqual(['2026-07.csv', '2026-08.csv']);
    expect(preview.columns).toHaveLength(3);
  });

  test('two headings are two tables; a name in both is told apart by its file', () => {
    const other = tableOf({ OAT: (_, i) => 80 + (i % 5), 'CHW Sec Flow (gpm)': (m) => m.fs });
    const preview = drop({ 'loop.csv': wide, 'weather_2026-07.csv': other });
    expect(preview.tables).toHaveLength(2);
    expect(preview.columns.map(({ column }) => column)).toEqual([...NAMES, 'OAT', 'weather: CHW Sec Flow (gpm)']);
    expect(preview.tables[1]!.names).toContainEqual({
      cell: 'CHW Sec Flow (gpm)',
      column: 'weather: CHW Sec Flow (gpm)',
    });
  });

  test('a file that is no table is left out and said, the others are read', () => {
    const preview = drop({ 'loop.csv': wide, 'readme.txt': 'Exported by the night shift.\nCall if missing.\n' });
    expect(preview.columns).toHaveLength(3);
    expect(preview.problems).toContainEqual(
      expect.objectContaining({
        code: 'file-left-out',
        severity: 'error',
        message: expect.stringContaining('"readme.txt"') as string,
      }),
    );
  });

  test('none readable: the first refusal stands for the drop', () => {
    expect(() => drop({ 'a.txt': 'words only\n', 'b.txt': 'more words\n' })).toThrow(/"a.txt": /);
  });
});

test('lines below the readings are a footer, not rows in error; the same lines among the readings are', () => {
  const lines = wide.trimEnd().split('\n');
  const footer = ['Total,,,', 'End of report'];
  const below = rowsOf([...lines, ...footer]);
  const codes = (text: string) => readText(text, planOf(previewOf(wide))).report.problems.map(({ code }) => code);
  expect(new Set(codes(below))).toEqual(new Set(['footer']));
  const among = rowsOf([...lines.slice(0, 300), ...footer, ...lines.slice(300)]);
  expect(codes(among)).toContain('short-row');
  expect(codes(among)).not.toContain('footer');
});

test('a status beside a single point voids its bad readings', () => {
  const lines = MOMENTS.map((_, i) => `${monthFirst(5 * i)},${cellOf(NAMES[0]!, i)},${i === 3 ? 'Bad' : 'Good'}`);
  const text = rowsOf(['Timestamp,Value,Quality', ...lines]);
  const preview = previewDrop([{ name: 'CHW Pri Sup Temp (F).csv', head: bytesOf(text), complete: true }], OPTIONS);
  expect(preview.columns.map(({ column, role }) => [column, role])).toEqual([[NAMES[0], 'primarySupplyTemp']]);
  const reader = createTrendReader(planOf(preview));
  reader.push(bytesOf(text));
  reader.finish();
  expect(reader.report().problems).toContainEqual(expect.objectContaining({ code: 'bad-quality', count: 1 }));
});
