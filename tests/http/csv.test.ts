import { describe, expect, it } from 'vitest';
import { contentDisposition, csvResponse, csvStream, type CsvCell } from '@/lib/http/csv';

async function* rowsOf(...rows: readonly (readonly CsvCell[])[]) {
  yield* rows;
}
const textOf = (stream: ReadableStream<Uint8Array<ArrayBuffer>>) => new Response(stream).text();

describe('csvStream', () => {
  it('writes a header, one line a row, and lines that end as RFC 4180 wants', async () => {
    expect(await textOf(csvStream(['timestamp', 'load_tons'], rowsOf(['2026-07-01T00:00:00Z', 412.5])))).toBe(
      'timestamp,load_tons\r\n2026-07-01T00:00:00Z,412.5\r\n',
    );
  });
  it('leaves a cell empty for null, undefined and NaN, and writes truth as 1 and 0', async () => {
    const text = await textOf(csvStream(['a', 'b', 'c', 'd', 'e'], rowsOf([null, undefined, NaN, true, false])));
    expect(text).toBe('a,b,c,d,e\r\n,,,1,0\r\n');
  });
  it('quotes text that holds a comma, a quote or a line break', async () => {
    const text = await textOf(csvStream(['x'], rowsOf(['a,b'], ['say "ah"'], ['one\ntwo'])));
    expect(text).toBe('x\r\n"a,b"\r\n"say ""ah"""\r\n"one\ntwo"\r\n');
  });
  it('gives the header alone when there are no rows', async () => {
    expect(await textOf(csvStream(['a'], rowsOf()))).toBe('a\r\n');
  });
  it('pulls rows as they are read and ends the source when the reader goes away', async () => {
    let made = 0;
    let ended = false;
    async function* endless() {
      try {
        for (;;) yield [made++];
      } finally {
        ended = true;
      }
    }
    const reader = csvStream(['n'], endless()).getReader();
    await reader.read();
    await reader.cancel();
    expect(made).toBeLessThan(2000);
    expect(ended).toBe(true);
  });
  it('passes a failing source on to the reader', async () => {
    async function* failing(): AsyncGenerator<CsvCell[]> {
      yield [1];
      throw new Error('the database went away');
    }
    await expect(textOf(csvStream(['n'], failing()))).rejects.toThrow('the database went away');
  });
});

describe('csvResponse', () => {
  it('is a download with the file name in both forms', () => {
    const response = csvResponse('Höhe, north.csv', ['a'], rowsOf());
    expect(response.headers.get('content-type')).toContain('text/csv');
    expect(response.headers.get('content-disposition')).toBe(
      `attachment; filename="H_he_ north.csv"; filename*=UTF-8''H%C3%B6he%2C%20north.csv`,
    );
  });
  it('never lets a name break out of the header', () => {
    expect(contentDisposition('a"\r\nx: y.csv')).not.toMatch(/[\r\n]/);
  });
});
