export type CsvCell = string | number | boolean | null | undefined;

const ROWS_A_CHUNK = 500;

function cell(value: CsvCell): string {
  if (value === null || value === undefined) return '';
  if (typeof value === 'number') return Number.isFinite(value) ? String(value) : '';
  if (typeof value === 'boolean') return value ? '1' : '0';
  return /[",\r\n]/.test(value) ? `"${value.replaceAll('"', '""')}"` : value;
}

const line = (cells: readonly CsvCell[]): string => `${cells.map(cell).join(',')}\r\n`;

/**
 * Rows as CSV (RFC 4180) in UTF-8, pulled as the reader takes them: memory does not grow with the number of rows. Missing is an
 * empty cell. A reader that goes away ends the source.
 */
export function csvStream(
  header: readonly string[],
  rows: AsyncIterable<readonly CsvCell[]>,
): ReadableStream<Uint8Array<ArrayBuffer>> {
  const encoder = new TextEncoder();
  const iterator = rows[Symbol.asyncIterator]();
  let pending = line(header);
  return new ReadableStream({
    async pull(controller) {
      for (let count = 0; count < ROWS_A_CHUNK; count++) {
        const next = await iterator.next();
        if (next.done === true) {
          if (pending !== '') controller.enqueue(encoder.encode(pending));
          controller.close();
          return;
        }
        pending += line(next.value);
      }
      controller.enqueue(encoder.encode(pending));
      pending = '';
    },
    async cancel() {
      await iterator.return?.();
    },
  });
}

/** A download of CSV. */
export const csvResponse = (
  filename: string,
  header: readonly string[],
  rows: AsyncIterable<readonly CsvCell[]>,
): Response =>
  new Response(csvStream(header, rows), {
    headers: {
      'content-type': 'text/csv; charset=utf-8; header=present',
      'content-disposition': contentDisposition(filename),
      'cache-control': 'private, no-cache',
    },
  });

/** `attachment` with the name in both forms of RFC 6266. */
export const contentDisposition = (filename: string): string =>
  `attachment; filename="${filename.replace(/[^\w.() -]/g, '_')}"; filename*=UTF-8''${encodeURIComponent(filename)}`;
