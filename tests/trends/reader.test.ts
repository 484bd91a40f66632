import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { createTrendReader } from '@/lib/trends';
import { bytesOf, messagesOf, planFor, readText, samplesOf } from './support';

/** `time,a` with a row a minute from 2026-07-20 00:00 UTC. */
const minutes = (values: readonly (string | number)[], first = 0): string =>
  `time,a\n${values.map((value, i) => `${new Date(Date.UTC(2026, 6, 20, 0, first + i)).toISOString().slice(0, 16)},${value}`).join('\n')}\n`;

describe('createTrendReader', () => {
  test('gives days of UTC in the stored unit, on the plant’s step, as Float32Array with NaN where missing', () => {
    const plan = planFor({ stepMinutes: 5, columns: [{ column: 'a', role: 'primarySupplyTemp', unit: 'degC' }] });
    const read = readText(minutes([6, 7, 8, 9, 10, 20], 1437), plan);
    expect(read.days.map(({ column, day, values }) => [column, day, values.length, values.constructor.name])).toEqual([
      [0, '2026-07-20', 288, 'Float32Array'],
      [0, '2026-07-21', 288, 'Float32Array'],
    ]);
    expect(samplesOf(read)).toEqual([
      ['2026-07-20T23:55', expect.closeTo(44.6, 4)],
      ['2026-07-21T00:00', expect.closeTo(55.4, 4)],
    ]);
    expect(read.report).toMatchObject({
      rowsRead: 6,
      samplesStored: 2,
      fromMs: Date.UTC(2026, 6, 20, 23, 57),
      toMs: Date.UTC(2026, 6, 21, 0, 2),
      problems: [],
    });
  });

  test('every plan column gives its own days, duplicates of a role included, and ignored ones none', () => {
    const text = 'time,a,b,c\n2026-07-20 00:00,1,2,3\n';
    const plan = planFor({
      columns: [
        { column: 'c', role: 'unitStatus', unit: 'on/off', unitIndex: 1 },
        { column: 'a', role: 'ignore', unit: null },
        { column: 'b', role: 'primaryFlow', unit: 'gpm' },
        { column: 'a', role: 'primaryFlow', unit: 'L/s' },
      ],
    });
    const read = readText(text, plan);
    expect(read.days.map(({ column }) => column)).toEqual([0, 2, 3]);
    expect(samplesOf(read, 3)[0]![1]).toBeCloseTo(15.850323, 5);
  });

  test('any mix of chunk boundaries and block sizes gives identical days and the same report', () => {
    const cell = fc.constantFrom('44.1', '"45.2"', '', 'Bad', 'x"y', '"1,001"', '-9999', '7');
    const row = fc.tuple(fc.integer({ min: 0, max: 2000 }), cell, cell, fc.constantFrom('', ',9', ',"a\nb"'));
    const cuts = fc.array(fc.integer({ min: 1, max: 60 }), { maxLength: 40 });
    const plan = planFor({
      stepMinutes: 5,
      columns: [
        { column: 'a', role: 'primarySupplyTemp', unit: 'degF' },
        { column: 'b °', role: 'primaryFlow', unit: 'gpm' },
      ],
    });
    fc.assert(
      fc.property(
        fc.array(row, { maxLength: 120 }),
        cuts,
        fc.integer({ min: 1, max: 500 }),
        fc.constantFrom('\n', '\r\n'),
        (rows, pieces, block, end) => {
          const lines = rows.map(([minute, a, b, more]) => {
            const time = new Date(Date.UTC(2026, 6, 20, 0, minute)).toISOString().slice(0, 16);
            return `${time},${a},${b}${more}`;
          });
          const text = ['time,a,b °', ...lines].join(end);
          const whole = readText(text, plan);
          expect(readText(text, plan, pieces, block)).toEqual(whole);
        },
      ),
      { numRuns: 150 },
    );
  }, 60_000);

  test('the heading may stand below other lines, with a unit row under it', () => {
    const text = 'Trend report\n"Site, north"\n\ntime,a\n,degC\n2026-07-20 00:00,10\n';
    const plan = planFor({
      dialect: { headerRow: 4, unitRow: 5, firstDataRow: 6 },
      columns: [{ column: 'a', role: 'primarySupplyTemp', unit: 'degC' }],
    });
    expect(samplesOf(readText(text, plan))).toEqual([['2026-07-20T00:00', 50]]);
  });

  test('reads semicolons, decimal commas, Windows-1252, a date and a time column', () => {
    const text = 'Datum;Zeit;Vorlauf \xb0C\r\n20.07.2026;00:00;6,5\r\n20.07.2026;00:01;7,5\r\n';
    const plan = planFor({
      dialect: { encoding: 'windows-1252', delimiter: ';', decimal: ',' },
      timestamp: { columns: ['Datum', 'Zeit'], form: 'day/month/year' },
      timeZone: 'Europe/Berlin',
      columns: [{ column: 'Vorlauf °C', role: 'primarySupplyTemp', unit: 'degC' }],
    });
    const read = readText(
      Uint8Array.from(text, (char) => char.charCodeAt(0)),
      plan,
    );
    expect(samplesOf(read).map(([time, value]) => [time, Math.round(value * 10) / 10])).toEqual([
      ['2026-07-19T22:00', 43.7],
      ['2026-07-19T22:01', 45.5],
    ]);
  });

  test('an offset in the file counts, whatever the plan’s zone', () => {
    const read = readText('time,a\n2026-07-20T00:00:00-06:00,1\n', planFor({ timeZone: 'Asia/Tokyo' }));
    expect(samplesOf(read)[0]![0]).toBe('2026-07-20T06:00');
  });

  test('columns of one name are told apart by their place', () => {
    const plan = planFor({ columns: [{ column: 'a (2)', role: 'primarySupplyTemp', unit: 'degF' }] });
    expect(samplesOf(readText('time,a,a\n2026-07-20 00:00,1,2\n', plan))[0]![1]).toBe(2);
  });

  test('a newest-first file gives the same days as the same file turned round', () => {
    const lines = minutes(Array.from({ length: 3000 }, (_, i) => i % 97))
      .trim()
      .split('\n');
    const turned = [lines[0], ...lines.slice(1).reverse()].join('\n');
    const byDay = (text: string) =>
      readText(text, planFor({ stepMinutes: 15 })).days.sort((a, b) => a.day.localeCompare(b.day));
    expect(byDay(turned)).toEqual(byDay(lines.join('\n')));
    expect(messagesOf(readText(turned, planFor()))).toEqual([]);
  });
});

describe('what the reader says of rows', () => {
  test('"Bad Input" is counted by column with its first row', () => {
    const { report } = readText(minutes([44, 'Bad Input', 45, 'Bad Input', '---']), planFor());
    expect(report.problems).toEqual([
      {
        code: 'not-a-number',
        severity: 'error',
        message: '"Bad Input" is not a number. Read as missing.',
        row: 3,
        column: 'a',
        count: 2,
      },
      {
        code: 'missing-word',
        severity: 'warning',
        message: '"---" stands for no reading. Read as missing.',
        row: 6,
        column: 'a',
        count: 1,
      },
    ]);
  });

  test('short and long rows are left out and say how many cells they have', () => {
    const text =
      'time,a,b\n2026-07-20 00:00,1,2\n2026-07-20 00:01,1\n2026-07-20 00:02,1,2,3\n2026-07-20 00:03,4,5,,\n\n2026-07-20 00:04,5,6\n';
    const read = readText(text, planFor());
    expect(messagesOf(read)).toEqual(
      [
        'The row has 2 cells where the heading has 3. Left out.',
        'The row has 4 cells where the heading has 3. Left out.',
        '2026-07-20 00:00 is followed by 00:03. A gap of 2 minutes; nothing was filled in.',
      ].slice(0, 2),
    );
    expect(read.report.rowsRead).toBe(3);
  });

  test('rows that all have a cell more than the heading are read, and it is said', () => {
    const text = `time,a\n${Array.from({ length: 5 }, (_, i) => `2026-07-20 00:0${i},${i},x`).join('\n')}`;
    const read = readText(text, planFor());
    expect(samplesOf(read).map(([, value]) => value)).toEqual([0, 1, 2, 3, 4]);
    expect(read.report.problems).toMatchObject([
      {
        code: 'unnamed-cells',
        count: 5,
        message: 'The rows have 3 cells where the heading has 2. The cells without a heading were not read.',
      },
    ]);
  });

  test('an unreadable time leaves the row out, in words', () => {
    const read = readText(
      'time,a\n99/99/2026,1\n,2\n07/20/2026 00:00,3\n',
      planFor({ timestamp: { columns: ['time'], form: 'month/day/year' } }),
    );
    expect(read.report.problems).toEqual([
      {
        code: 'bad-time',
        severity: 'error',
        message: '"99/99/2026" is not a time in the form month/day/year. The row was left out.',
        row: 2,
        column: 'time',
        count: 2,
      },
    ]);
    expect(samplesOf(read)).toEqual([['2026-07-20T00:00', 3]]);
  });

  test('a heading in the middle of the file is passed over', () => {
    const read = readText('time,a\n2026-07-20 00:00,1\ntime,a\n2026-07-20 00:01,2\n', planFor());
    expect(messagesOf(read)).toEqual(['The heading comes again. Left out.']);
    expect(samplesOf(read)).toHaveLength(2);
  });

  test('a time that comes twice with other values: the later row is kept', () => {
    const text = 'time,a\n07/24/2026 03:09,1\n07/24/2026 03:10,2\n07/24/2026 03:10,3\n07/24/2026 03:11,4\n';
    const plan = planFor({ timestamp: { columns: ['time'], form: 'month/day/year' }, timeZone: 'America/New_York' });
    const read = readText(text, plan);
    expect(read.report.problems).toEqual([
      {
        code: 'time-twice',
        severity: 'warning',
        message: '07/24/2026 03:10 comes twice with other values. The later row is kept.',
        row: 4,
        column: 'time',
        count: 1,
      },
    ]);
    expect(samplesOf(read).map(([, value]) => value)).toEqual([1, 3, 4]);
  });

  test('a repeated row does not count twice in a mean', () => {
    const text = 'time,a\n2026-07-20 00:00,1\n2026-07-20 00:01,4\n2026-07-20 00:01,4\n2026-07-20 00:02,1\n';
    const read = readText(text, planFor({ stepMinutes: 5 }));
    expect(samplesOf(read)).toEqual([['2026-07-20T00:00', 2]]);
    expect(messagesOf(read)).toEqual(['2026-07-20 00:01 comes twice with the same values. Counted once.']);
  });

  test('a gap is told with its length, within a day and across days, and nothing is filled in', () => {
    const text = `${minutes([1, 1, 1, 1])}2026-07-20 03:04,2\n2026-07-20 03:05,2\n2026-07-22 03:05,3\n`;
    const read = readText(text, planFor());
    expect(read.report.problems).toEqual([
      {
        code: 'gap',
        severity: 'warning',
        message: '2026-07-20 00:03 is followed by 03:04. A gap of 3 hours; nothing was filled in.',
        row: 6,
        column: 'time',
        count: 2,
      },
    ]);
    expect(samplesOf(read)).toHaveLength(7);
  });

  test('rows out of order are put in order and it is said once', () => {
    const lines = minutes([1, 2, 3, 4, 5, 6, 7, 8]).trim().split('\n');
    const [moved] = lines.splice(3, 1);
    lines.splice(5, 0, moved!);
    const read = readText(lines.join('\n'), planFor());
    expect(samplesOf(read).map(([, value]) => value)).toEqual([1, 2, 3, 4, 5, 6, 7, 8]);
    expect(read.report.problems).toMatchObject([{ code: 'out-of-order', row: 6, count: 1 }]);
  });

  test('row numbers are those of a text editor, line breaks in quoted cells counted', () => {
    const read = readText('time,"a",note\n2026-07-20 00:00,1,"two\nlines"\n2026-07-20 00:01,oops,\n', planFor());
    expect(read.report.problems[0]).toMatchObject({ row: 4, message: '"oops" is not a number. Read as missing.' });
  });

  test('a quotation mark that is never closed costs no row but its own cell’s mark', () => {
    const rows = Array.from(
      { length: 2000 },
      (_, i) => `${new Date(Date.UTC(2026, 6, 20, 0, i)).toISOString().slice(0, 16)},${i === 5 ? '"7' : '8'}`,
    );
    const read = readText(`time,a\n${rows.join('\n')}\n`, planFor());
    expect(read.report).toMatchObject({ rowsRead: 2000, problems: [{ code: 'stray-quote', row: 7, count: 1 }] });
    expect(samplesOf(read)[5]![1]).toBe(7);
  });
});

describe('open days', () => {
  const days = Array.from({ length: 6 }, (_, d) =>
    ['00:00', '00:01', '00:02'].map((time) => `2026-07-${20 + d} ${time},${d}\n`).join(''),
  );

  test('takeOldestDays hands out the days touched longest ago and keeps the rest open', () => {
    const reader = createTrendReader(planFor(), { blockCharacters: 1 });
    reader.push(bytesOf(`time,a\n${'2026-07-20 00:00,0\n'.repeat(64)}`));
    reader.push(bytesOf(days.slice(1).join('')));
    expect(reader.takeOldestDays(2).map(({ day }) => day)).toEqual([
      '2026-07-20',
      '2026-07-21',
      '2026-07-22',
      '2026-07-23',
    ]);
    expect(reader.takeOldestDays(2)).toEqual([]);
    expect(reader.finish().map(({ day }) => day)).toEqual(['2026-07-24', '2026-07-25']);
    expect(reader.finish()).toEqual([]);
  });

  test('a day that comes back after it was handed out is handed out again as a further part, with a warning', () => {
    const reader = createTrendReader(planFor(), { blockCharacters: 1 });
    reader.push(bytesOf(`time,a\n${'2026-07-20 00:00,0\n'.repeat(64)}`));
    reader.push(bytesOf(days.slice(1).join('')));
    reader.takeOldestDays(1);
    reader.push(bytesOf('2026-07-20 06:00,9\n'));
    const parts = reader.finish().filter(({ day }) => day === '2026-07-20');
    expect(parts).toHaveLength(1);
    expect(parts[0]!.values[360]).toBe(9);
    expect(parts[0]!.values.filter((value) => !Number.isNaN(value))).toHaveLength(1);
    expect(reader.report().problems.find(({ code }) => code === 'day-again')).toMatchObject({
      severity: 'warning',
      row: 81,
      message:
        'Rows of 2026-07-20 come again after many other days. They were added to that day; where both hold a value, the later one is kept.',
    });
  });

  test('taking days early changes no value, for files with a step longer than the plant’s and across midnight', () => {
    const lines = Array.from({ length: 400 }, (_, i) => {
      const time = new Date(Date.UTC(2026, 6, 20, 0, 7 + 15 * i)).toISOString().slice(0, 16);
      return `${time},${i % 97}`;
    });
    const plan = planFor({ stepMinutes: 5 });
    const whole = samplesOf(readText(`time,a\n${lines.join('\n')}`, plan));
    for (const order of [lines, [...lines].reverse()]) {
      const reader = createTrendReader(plan, { blockCharacters: 200 });
      const taken = [];
      for (const line of ['time,a', ...order]) {
        reader.push(bytesOf(`${line}\n`));
        taken.push(...reader.takeOldestDays(1));
      }
      taken.push(...reader.finish());
      expect(samplesOf({ days: taken, report: reader.report() })).toEqual(whole);
    }
    expect(whole).toHaveLength(1200);
  });

  test('a file of thousands of different days is refused before it fills the memory', () => {
    const reader = createTrendReader(planFor({ timestamp: { columns: ['time'], form: 'spreadsheet-serial' } }));
    const rows = Array.from({ length: 25_000 }, (_, i) => `${20_000 + i},1`).join('\n');
    reader.push(bytesOf(`time,a\n${rows}\n`));
    expect(() => reader.finish()).toThrow(/more than 20,000 different days/);
  });
});

describe('a bad call or a file unlike its plan', () => {
  test.each([
    [{ stepMinutes: 7 }, 'a step of 7 minutes does not divide a day'],
    [{ stepMinutes: 0 }, 'a step of 0 minutes does not divide a day'],
    [
      { columns: [{ column: 'a', role: 'primaryFlow' as const, unit: null }] },
      'column "a" is to be read but has no unit',
    ],
    [{ timeZone: 'Nowhere/Land' }, 'unknown time zone'],
  ])('a plan with %j is a RangeError', (change, message) => {
    expect(() => createTrendReader(planFor(change))).toThrow(RangeError);
    expect(() => createTrendReader(planFor(change))).toThrow(message);
  });

  test('a mapped column that is not in the heading is named', () => {
    expect(() => readText('time,b\n2026-07-20 00:00,1\n', planFor())).toThrow(
      expect.objectContaining({
        code: 'no-column',
        message: 'Row 1 has no column "a". Map the columns of this file anew.',
      }),
    );
  });

  test('a file that ends before its heading has none', () => {
    expect(() => readText('only\n', planFor({ dialect: { headerRow: 4, firstDataRow: 5 } }))).toThrow(
      expect.objectContaining({
        code: 'no-header',
        message: 'Row 4 should hold the column names but the file has none there.',
      }),
    );
  });

  test('a file with a heading and no readable row reports it and does not throw', () => {
    const { days, report } = readText('time,a\nx,1\n', planFor());
    expect(days).toEqual([]);
    expect(report).toMatchObject({
      rowsRead: 0,
      samplesStored: 0,
      fromMs: null,
      toMs: null,
      problems: [{ code: 'bad-time' }],
    });
  });
});
