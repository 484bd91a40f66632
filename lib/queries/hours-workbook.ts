import { PassThrough, Readable } from 'node:stream';
import ExcelJS from 'exceljs';
import { contentDisposition } from '../http/csv';
import { hourCells, hourHeader, type HourSqlRow } from './hour-record';

const TYPE = 'application/vnd.openxmlformats-officedocument.spreadsheetml.sheet';
const CAUTION =
  'An estimate with uncertainty, for review by the plant’s operator and a licensed engineer. The maker’s limits, warranty and local code govern.';

/**
 * The hour table as a workbook, written row by row while it is read. Times are instants in UTC as text, as in the CSV, because
 * a workbook's own dates know no time zone. The caution stands on a sheet of its own: the table stays a table.
 */
export function hoursWorkbook(filename: string, rows: AsyncIterable<HourSqlRow>, units: 'ip' | 'si'): Response {
  const target = new PassThrough();
  const body = Readable.toWeb(target) as ReadableStream<Uint8Array>;
  writeWorkbook(target, rows, units).catch((error: unknown) =>
    target.destroy(error instanceof Error ? error : new Error(String(error))),
  );
  return new Response(body, {
    headers: {
      'content-type': TYPE,
      'content-disposition': contentDisposition(filename),
      'cache-control': 'private, no-cache',
    },
  });
}

async function writeWorkbook(target: PassThrough, rows: AsyncIterable<HourSqlRow>, units: 'ip' | 'si'): Promise<void> {
  const book = new ExcelJS.stream.xlsx.WorkbookWriter({ stream: target, useStyles: true });
  const sheet = book.addWorksheet('Hours', { views: [{ state: 'frozen', ySplit: 1 }] });
  const header = hourHeader(units);
  sheet.columns = header.map((column) => ({ header: column, key: column, width: Math.max(12, column.length + 2) }));
  sheet.getRow(1).font = { bold: true };
  sheet.getRow(1).commit();
  for await (const row of rows) {
    if (target.destroyed) return; // the reader has gone away
    sheet.addRow(hourCells(row, units)).commit();
  }
  sheet.commit();
  const notes = book.addWorksheet('Notes');
  notes.addRow([CAUTION]).commit();
  notes.commit();
  await book.commit();
}
