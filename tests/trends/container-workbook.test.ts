import ExcelJS from 'exceljs';
import { describe, expect, it } from 'vitest';
import { numberKind } from '@/lib/containers/number-format';
import { SerialTimes } from '@/lib/containers/serial-time';
import { TrendError } from '@/lib/trends/types';
import { bareWorkbook, sheetOf, unpack, zipOf } from './container-support';

async function written(build: (workbook: ExcelJS.Workbook) => void): Promise<Buffer> {
  const workbook = new ExcelJS.Workbook();
  build(workbook);
  return Buffer.from(await workbook.xlsx.writeBuffer());
}
const at = (text: string): Date => new Date(`${text}Z`);
const only = async (bytes: Uint8Array): Promise<string> => {
  const { texts } = await unpack(bytes, 'book.xlsx');
  expect(Object.keys(texts)).toHaveLength(1);
  return Object.values(texts)[0] ?? '';
};
const refusal = async (bytes: Uint8Array, limitBytes?: number): Promise<string> => {
  const error: unknown = await unpack(bytes, 'book.xlsx', limitBytes).catch((thrown: unknown) => thrown);
  expect(error).toBeInstanceOf(TrendError);
  return (error as TrendError).message;
};

describe('a workbook', () => {
  it('becomes one comma-separated text a visible sheet of two rows or more; others are named', async () => {
    const { texts, problems, open } = await unpack(
      await written((book) => {
        book.addWorksheet('Week 1').addRows([
          ['Time', 'CHWS'],
          ['x', 44.1],
        ]);
        book.addWorksheet('Notes', { state: 'hidden' }).addRows([['a'], ['b']]);
        book.addWorksheet('Secret', { state: 'veryHidden' }).addRows([['a'], ['b']]);
        book.addWorksheet('Title').addRows([['only this']]);
        book.addWorksheet('Blank');
        book.addWorksheet('Week 2').addRows([
          ['Time', 'CHWS'],
          ['y', 45],
        ]);
      }),
      'book.xlsx',
    );
    expect(texts).toEqual({ 'book.xlsx/Week 1': 'Time,CHWS\nx,44.1\n', 'book.xlsx/Week 2': 'Time,CHWS\ny,45\n' });
    expect(problems.map(({ message }) => message)).toEqual([
      '"book.xlsx": "Notes", "Secret" not read, because each is a hidden sheet.',
      '"book.xlsx": "Title" not read, because it is a sheet with fewer than two rows.',
      '"book.xlsx": "Blank" not read, because it is empty.',
    ]);
    expect(open).toEqual([]);
  });

  it.each([false, true])('keeps dates and times to the nearest second (1904 system: %s)', async (date1904) => {
    const text = await only(
      await written((book) => {
        book.properties.date1904 = date1904;
        const sheet = book.addWorksheet('Trend');
        sheet.addRow(['Time', 'Clock']);
        for (const [stamp, format] of [
          ['2026-01-01T00:00:00', 'yyyy-mm-dd hh:mm'],
          ['2025-12-31T23:59:59.600', 'm/d/yy h:mm'],
          ['2024-02-29T12:34:56', '[$-409]d-mmm-yyyy h:mm:ss AM/PM'],
          ['2026-03-08T02:15:00', '"am" dd.mm.yyyy\\, hh:mm'],
        ] as const) {
          const row = sheet.addRow([at(stamp), 0.75]);
          row.getCell(1).numFmt = format;
          row.getCell(2).numFmt = 'hh:mm';
        }
      }),
    );
    expect(text.split('\n')).toEqual([
      'Time,Clock',
      '2026-01-01 00:00:00,18:00:00',
      '2026-01-01 00:00:00,18:00:00',
      '2024-02-29 12:34:56,18:00:00',
      '2026-03-08 02:15:00,18:00:00',
      '',
    ]);
  });

  it('keeps numbers unrounded, booleans, errors, formula results, rich text and characters that need quotes', async () => {
    const text = await only(
      await written((book) => {
        const sheet = book.addWorksheet('Trend');
        sheet.addRow(['a', 'b']);
        sheet.addRow([0.1 + 0.2, -1234567.890625]);
        sheet.addRow([true, false]);
        sheet.addRow([{ error: '#N/A' }, { error: '#DIV/0!' }]);
        sheet.addRow([
          { formula: 'A1+1', result: 42.5 },
          { formula: 'A1', result: 'words' },
        ]);
        sheet.addRow([{ richText: [{ text: 'CHW' }, { font: { bold: true }, text: ' supply' }] }, 'two\nlines']);
        sheet.addRow(['say "on", or off', '=1+1']);
        sheet.addRow([1e21, 5e-7]);
      }),
    );
    expect(text).toBe(
      [
        'a,b',
        '0.30000000000000004,-1234567.890625',
        'TRUE,FALSE',
        '#N/A,#DIV/0!',
        '42.5,words',
        'CHW supply,"two\nlines"',
        '"say ""on"", or off",=1+1',
        '1e+21,5e-7',
        '',
      ].join('\n'),
    );
  });

  it('keeps a date beside a clock as a date, a moment shown as a date whole, and percentages with their sign', async () => {
    const text = await only(
      await written((book) => {
        const sheet = book.addWorksheet('Trend');
        sheet.addRow(['Date', 'Clock', 'Load']);
        sheet.addRow([at('2026-01-01T00:00:00'), 0, 0.07]);
        sheet.addRow([at('2026-01-01T00:00:00'), 0.25, 1]);
        sheet.addRow([at('2026-01-01T09:30:00'), 0.5, 0.123456]);
        sheet.getColumn(1).numFmt = 'm/d/yyyy';
        sheet.getColumn(2).numFmt = 'h:mm AM/PM';
        sheet.getColumn(3).numFmt = '0%';
      }),
    );
    expect(text).toBe(
      'Date,Clock,Load\n2026-01-01,00:00:00,7%\n2026-01-01,06:00:00,100%\n2026-01-01 09:30:00,12:00:00,12.3456%\n',
    );
  });

  it('keeps empty cells and rows in their place, and only the first cell of merged ones', async () => {
    const text = await only(
      await written((book) => {
        const sheet = book.addWorksheet('Trend');
        sheet.getCell('B2').value = 'Chiller 1';
        sheet.mergeCells('B2:C2');
        sheet.getCell('A5').value = 'Time';
        sheet.getCell('D5').value = 'Return';
        sheet.getCell('B6').value = 7;
      }),
    );
    expect(text).toBe('\n,Chiller 1\n\n\nTime,,,Return\n,7,,\n');
  });

  it('is the same whether its text is shared or stands in the cells, as the streaming writer leaves it', async () => {
    const rows = Array.from({ length: 50 }, (_, i) => [`row ${i}`, i / 7, i % 2 === 0 ? 'on' : 'off']);
    const shared = await written((book) => book.addWorksheet('S').addRows(rows));
    const expected = rows.map((row) => row.join(',')).join('\n') + '\n';
    expect(await only(shared)).toBe(expected);
    const inline = rows.map(
      (row) =>
        `<row>${row.map((cell) => (typeof cell === 'number' ? `<c><v>${cell}</v></c>` : `<c t="inlineStr"><is><t>${cell}</t></is></c>`)).join('')}</row>`,
    );
    expect(await only(bareWorkbook(sheetOf(inline.join(''))))).toBe(expected);
  });

  it('reads prefixed elements, ISO dates, escaped characters and no phonetic text', async () => {
    const sheet =
      '<x:worksheet xmlns:x="u"><x:dimension ref="A1:B2"/><x:sheetData>' +
      '<x:row r="1"><x:c r="A1" t="s"><x:v>0</x:v></x:c><x:c r="B1" t="inlineStr"><x:is><x:t>a_x0041_&amp;&#66;</x:t></x:is></x:c></x:row>' +
      '<x:row r="2"><x:c r="A2" t="d"><x:v>2026-01-01T10:00:00</x:v></x:c><x:c r="B2"><x:f>1+1</x:f><x:v>2</x:v></x:c></x:row>' +
      '</x:sheetData></x:worksheet>';
    const strings = '<sst><si><t>T</t><rPh sb="0" eb="1"><t>no</t></rPh></si></sst>';
    expect(await only(bareWorkbook(sheet, [{ name: 'xl/sharedStrings.xml', content: strings }]))).toBe(
      'T,aA&B\n2026-01-01 10:00:00,2\n',
    );
  });

  it('inside a zip archive is unpacked as well', async () => {
    const book = await written((each) => each.addWorksheet('Jan').addRows([['Time'], [1]]));
    const { texts, open } = await unpack(
      zipOf([
        { name: 'a/jan.xlsx', content: book, stored: true },
        { name: 'b.csv', content: 'x,y\n1,2\n' },
      ]),
    );
    expect(texts).toEqual({ 'drop.zip/a/jan.xlsx/Jan': 'Time\n1\n', 'drop.zip/b.csv': 'x,y\n1,2\n' });
    expect(open).toEqual([]);
  });
});

describe('a workbook that is refused in words', () => {
  const row = '<row><c><v>1</v></c></row>';
  it.each<[string, string, RegExp]>([
    [
      'a document type, by which entities multiply',
      '<!DOCTYPE x [<!ENTITY a "ha"><!ENTITY b "&a;&a;&a;">]><worksheet><sheetData/></worksheet>',
      /declares a document type/,
    ],
    ['an entity nobody declared', sheetOf('<row><c t="str"><v>&b;</v></c></row>'), /no well-formed XML/],
    ['XML that breaks off', '<worksheet><sheetData><row><c>', /no well-formed XML/],
    ['no XML', 'Time,Value\n1,2\n', /no well-formed XML/],
    ['elements without end', '<a>'.repeat(5000), /no well-formed XML/],
    ['a row beyond the sheet', sheetOf('<row r="1048577"/>'), /row 1048577 is out of place/],
    ['a column beyond the sheet', sheetOf('<row r="1"><c r="XFE1"><v>1</v></c></row>'), /cell XFE1 is out of place/],
    ['rows out of order', sheetOf('<row r="5"/><row r="5"/>'), /row 5 is out of place/],
    ['a cell of endless text', sheetOf(`<row><c t="str"><v>${'a<!---->'.repeat(1_100_000)}</v></c></row>`), /damaged/],
    ['an endless comment', `<worksheet><!--${'<'.repeat(1_200_000)}--></worksheet>`, /no well-formed XML/],
  ])('%s', async (_, sheet, words) => {
    expect(await refusal(bareWorkbook(sheet))).toMatch(words);
  });

  it('shared text beyond what is kept in memory', { timeout: 30_000 }, async () => {
    const strings = `<sst>${Array.from({ length: 7000 }, (_, i) => `<si><t>${i} ${'x'.repeat(10_000)}</t></si>`).join('')}</sst>`;
    const bytes = bareWorkbook(sheetOf(row + row), [{ name: 'xl/sharedStrings.xml', content: strings, stored: true }]);
    expect(await refusal(bytes, 2 ** 31)).toMatch(/more text in its cells than is read/);
  });

  it('a sheet whose few cells stand so far to the right that its text would be thousands of times larger', async () => {
    const wide = '<row><c r="XFD1"><v>1</v></c></row>' + row.repeat(20_000);
    expect(await refusal(bareWorkbook(sheetOf(wide), []), 2 ** 31)).toMatch(/more than 200 times its packed size/);
  });
});

describe('number formats and serial times', () => {
  it.each([
    [0, undefined, 'number'],
    [10, undefined, 'percent'],
    [14, undefined, 'date'],
    [22, undefined, 'datetime'],
    [20, undefined, 'time'],
    [46, undefined, 'elapsed'],
    [164, 'General', 'number'],
    [164, '0.00E+00', 'number'],
    [164, '#,##0.0" days"', 'number'],
    [164, '0.0\\ \\d', 'number'],
    [164, '[Red]0.0;[Blue]-0.0', 'number'],
    [164, '_-* #,##0.00_-;-* #,##0.00_-', 'number'],
    [164, 'mmm-yy', 'date'],
    [164, 'mmmm', 'date'],
    [164, 'mm:ss.0', 'time'],
    [164, 'h:mm AM/PM', 'time'],
    [164, '[h]:mm', 'elapsed'],
    [164, '0.0%', 'percent'],
    [164, '0.0" %"', 'number'],
    [164, 'yyyy\\-mm\\-dd\\Thh:mm:ss', 'datetime'],
  ] as const)('format %i %s is %s', (id, code, kind) => {
    expect(numberKind(id, code)).toBe(kind);
  });

  it('are right at the corners of both systems, and left alone outside them', () => {
    const from1900 = new SerialTimes(false);
    expect(from1900.text(1, 'datetime')).toBe('1900-01-01 00:00:00');
    expect(from1900.text(61, 'datetime')).toBe('1900-03-01 00:00:00');
    expect(from1900.text(45_292.999_999, 'datetime')).toBe('2024-01-02 00:00:00');
    expect(from1900.text(45_292.5, 'time')).toBe('2024-01-01 12:00:00');
    expect(from1900.text(1.5, 'elapsed')).toBe('36:00:00');
    expect(from1900.text(-1, 'datetime')).toBeNull();
    expect(from1900.text(2_958_466, 'datetime')).toBeNull();
    expect(new SerialTimes(true).text(43_830, 'datetime')).toBe('2024-01-01 00:00:00');
  });
});
