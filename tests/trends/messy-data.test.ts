import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { createTrendReader, previewTrend, type ReadPlan, type TrendPreview } from '@/lib/trends';
import { wholeRows } from '@/lib/trends/rows';
import { OPTIONS, previewOf } from './preview-support';

// Open data beside the project; sources and licences are in shared/data/README.md.
const DATA = path.resolve(import.meta.dirname, '../../../shared/data');
const file = (name: string): Uint8Array => readFileSync(path.join(DATA, name));

describe('open data beside the project', () => {
  if (!existsSync(DATA)) {
    test('is not there (shared/data): nothing was read', () => {
      expect(existsSync(DATA)).toBe(false);
    });
    return;
  }

  describe('a real one-minute hydronic logger: Latin-1, tabs, decimal commas, DD.MM.YYYY, one more field a row than the heading', () => {
    const read = (name: string, change: Partial<ReadPlan> = {}) => {
      const bytes = file(`messy_csv/solar_logger/${name}`);
      const preview = previewTrend(bytes, { ...OPTIONS, timeZone: 'Europe/Berlin' });
      const columns = preview.columns.map(({ column }) => ({ column, role: 'ignore' as const, unit: null }));
      const temperature = columns.findIndex(({ column }) => column.startsWith('Temperatur Sensor 1'));
      const mapped = columns.map((each, i) =>
        i === temperature ? { column: each.column, role: 'primarySupplyTemp' as const, unit: 'degC' as const } : each,
      );
      const reader = createTrendReader({ ...preview, columns: mapped, stepMinutes: 1, ...change });
      reader.push(bytes);
      return { preview, days: reader.finish(), report: reader.report() };
    };

    test.each([
      ['20170622.csv', 1436],
      ['20171029.csv', 1440],
      ['20180815.csv', 1438],
    ])('%s is recognised and read', (name, rows) => {
      const { preview, report } = read(name);
      expect(preview.dialect).toMatchObject({
        encoding: 'windows-1252',
        delimiter: '\t',
        decimal: ',',
        headerRow: 1,
        firstDataRow: 2,
      });
      expect(preview).toMatchObject({
        timestamp: { columns: ['Datum & Uhrzeit'], form: 'day/month/year' },
        stepMinutes: 1,
      });
      expect(preview.columns[0]).toMatchObject({ column: 'Temperatur Sensor 1 [ °C]' });
      expect(report.rowsRead).toBe(rows);
      expect(
        report.problems.every(({ code }) => ['spliced-row', 'gap', 'repeated-hour', 'zero-bytes'].includes(code)),
      ).toBe(true);
    });

    test('of two records on one line the whole one is read; it and the zero bytes are said', () => {
      const { report } = read('20170622.csv');
      expect(report.problems.filter(({ code }) => code === 'spliced-row')).toEqual([
        expect.objectContaining({ row: 221, count: 1, severity: 'warning' }),
      ]);
      expect(report.problems.map(({ code }) => code)).toContain('zero-bytes');
    });

    test('its day of 25 hours lies on two UTC days, and both passes through the repeated hour are told apart', () => {
      const { report, days } = read('20171029.csv');
      expect(report.problems.map(({ code }) => code)).toContain('repeated-hour');
      expect(days.map(({ day }) => day)).toEqual(['2017-10-28', '2017-10-29']);
    });

    test('888,8 and -88,8 degrees are no temperatures and do not set the low and the high', () => {
      const { preview } = read('20180815.csv');
      const broken = preview.columns.find(({ column }) => column.startsWith('Temperatur Sensor 5'));
      expect(broken).toMatchObject({ role: 'ignore', low: null, high: null });
    });
  });

  describe('a laboratory plant with primary and secondary flow', () => {
    const original = Buffer.from(file('nist_ibal/csv/Tucson_Shift_Default.csv')).toString('latin1');

    test('is read as it is: the year is proposed and asked, the newest that is not in the future', () => {
      const preview = previewOf(original, { unitFlowGpm: 18, nowMs: Date.UTC(2026, 8, 15) });
      expect(preview.timestamp).toMatchObject({ columns: ['date_time'], form: 'month/day', year: 2026 });
      expect(preview.problems.map(({ code }) => code)).toContain('no-year');
    });

    const dated = original.replace(/^(\d\d\/\d\d) {2}/gm, '2026/$1  ');
    const preview: TrendPreview = previewOf(dated, { unitFlowGpm: 18, timeZone: 'America/New_York' });
    const of = (column: string) => preview.columns.find((each) => each.column === column)!;

    test('with a year, hour 24 ends its day and all 1,440 minutes are one day', () => {
      expect(preview).toMatchObject({
        timestamp: { columns: ['date_time'], form: 'year/month/day', stamps: 'end' },
        stepMinutes: 1,
        firstRows: 1440,
        problems: [expect.objectContaining({ code: 'end-stamps' })],
      });
    });

    test.each([
      ['ch1_on', 'unitStatus', 'on/off', 1],
      ['ch2_on', 'unitStatus', 'on/off', 2],
      ['ch1_f_e', 'unitFlow', 'gpm', 1],
      ['ch2_f_e', 'unitFlow', 'gpm', 2],
      ['ch1_e_in_rtd', 'unitEnteringTemp', 'degF', 1],
      ['ch1_e_out_rtd', 'unitLeavingTemp', 'degF', 1],
      ['ch1_t_sp_f', 'unitSetpoint', 'degF', 1],
      ['sl_f', 'secondaryFlow', 'gpm', null],
    ])('%s is %s', (column, role, unit, unitIndex) => {
      expect(of(column)).toMatchObject({ role, unit, unitIndex });
      expect(of(column).confidence).toBeGreaterThan(0.6);
    });

    test('power in W is told by the energy balance; psi or ft, and the sensor behind pump 3, are left to a person', () => {
      expect(of('ch1_power')).toMatchObject({ role: 'unitPower', unit: 'W', unitIndex: 1 });
      for (const column of ['pump3_dp', 'pump3_out_rtd']) expect(of(column).confidence).toBeLessThan(0.5);
    });
  });

  describe('edge cases of CSV', () => {
    const rows = (name: string) =>
      wholeRows(Buffer.from(file(`messy_csv/csv-spectrum/${name}`)).toString('utf8'), ',', true);

    test.each<[string, string[][]]>([
      [
        'comma_in_quotes.csv',
        [
          ['first', 'last', 'address', 'city', 'zip'],
          ['John', 'Doe', '120 any st.', 'Anytown, WW', '08123'],
        ],
      ],
      [
        'empty.csv',
        [
          ['a', 'b', 'c'],
          ['1', '', ''],
          ['2', '3', '4'],
        ],
      ],
      [
        'empty_crlf.csv',
        [
          ['a', 'b', 'c'],
          ['1', '', ''],
          ['2', '3', '4'],
        ],
      ],
      [
        'escaped_quotes.csv',
        [
          ['a', 'b'],
          ['1', 'ha "ha" ha'],
          ['3', '4'],
        ],
      ],
      [
        'newlines.csv',
        [
          ['a', 'b', 'c'],
          ['1', '2', '3'],
          ['Once upon \na time', '5', '6'],
          ['7', '8', '9'],
        ],
      ],
      [
        'newlines_crlf.csv',
        [
          ['a', 'b', 'c'],
          ['1', '2', '3'],
          ['Once upon \na time', '5', '6'],
          ['7', '8', '9'],
        ],
      ],
      [
        'quotes_and_newlines.csv',
        [
          ['a', 'b'],
          ['1', 'ha \n"ha" \nha'],
          ['3', '4'],
        ],
      ],
      [
        'simple.csv',
        [
          ['a', 'b', 'c'],
          ['1', '2', '3'],
        ],
      ],
      [
        'utf8.csv',
        [
          ['a', 'b', 'c'],
          ['1', '2', '3'],
          ['4', '5', 'ʤ'],
        ],
      ],
    ])('%s', (name, expected) => {
      expect(rows(name)).toEqual(expected);
    });

    test.each([
      ['messytables/utf-16le_encoded.csv', 'no-time-column'],
      ['messytables/mixedGLB.csv', 'no-time-column'],
      ['messytables/weird_head_padding.csv', 'no-time-column'],
      ['messytables/null.csv', 'no-time-column'],
      ['csv-spectrum/simple.csv', 'no-time-column'],
      ['nem12/Example_NEM12_15min_200_30min_300.csv', 'no-time-column'],
      ['nem12/Example_empty_file.csv', 'empty'],
    ])('%s is no trend and is refused with code %s', (name, code) => {
      expect(() => previewOf(file(`messy_csv/${name}`))).toThrow(expect.objectContaining({ name: 'TrendError', code }));
    });

    test('every file of the collection gets a preview or a TrendError, never another error', () => {
      for (const name of [
        'simple.ssv',
        'example.tsv',
        'excel_pasting.csv',
        'spanish_chars.csv',
        'skip_initials.csv',
        'utf8bom.csv',
      ]) {
        try {
          previewOf(file(`messy_csv/messytables/${name}`));
        } catch (error) {
          expect(error).toMatchObject({ name: 'TrendError' });
        }
      }
      expect(previewOf(file('messy_csv/messytables/simple.ssv'))).toMatchObject({
        dialect: { delimiter: ';' },
        timestamp: { columns: ['date'], form: 'iso' },
      });
      expect(previewOf(file('messy_csv/messytables/example.tsv'))).toMatchObject({
        dialect: { delimiter: '\t' },
        stepMinutes: 60,
      });
    });
  });
});
