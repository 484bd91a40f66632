import { expect, test } from 'vitest';
import { droppedFiles, sortOut } from '@/lib/client/dropped-files';

const file = (name: string, text = 'a,b\n1,2\n') => new File([text], name);

test.each(['week.csv', 'week.txt', 'week.tsv', 'week.csv.gz', 'all.zip', 'book.xlsx', 'export', 'trend.log', 'x.CSV'])(
  '%s is sent',
  (name) => {
    expect(sortOut([file(name)]).refused).toEqual([]);
  },
);

test.each([
  ['report.pdf', 'CSV'],
  ['old.XLS', '.xlsx'],
  ['letter.docx', 'CSV'],
  ['all.rar', '.zip'],
])('%s is told before it is sent, with what to do', (name, word) => {
  expect(sortOut([file(name)]).refused[0]?.why).toContain(word);
});

test('what cannot be read never holds up the others', () => {
  const { good, refused } = sortOut([file('report.pdf'), file('a.csv'), file('empty.csv', ''), file('b.csv')]);
  expect(good.map(({ name }) => name)).toEqual(['a.csv', 'b.csv']);
  expect(refused.map(({ file: { name } }) => name)).toEqual(['report.pdf', 'empty.csv']);
  expect(refused[1]?.why).toBe('"empty.csv" is empty. Export it again, with at least one row of data.');
});

type Entry = { name: string; isDirectory: boolean };
const fileEntry = (name: string) => ({
  name,
  isDirectory: false,
  file: (done: (file: File) => void) => done(file(name)),
});
const folder = (name: string, entries: readonly Entry[]) => ({
  name,
  isDirectory: true,
  createReader: () => {
    // Browsers hand out a folder's entries in parts.
    const parts = [entries.slice(0, 2), entries.slice(2), []];
    return { readEntries: (done: (part: readonly Entry[]) => void) => done(parts.shift() ?? []) };
  },
});
const dropOf = (...entries: Entry[]): DataTransfer =>
  ({
    files: [file('flat.csv')],
    items: entries.map((entry) => ({
      kind: 'file',
      webkitGetAsEntry: () => entry,
      getAsFile: () => file(entry.name),
    })),
  }) as unknown as DataTransfer;

test('a dropped folder gives the files in it, however deep, in order, without what computers leave there', async () => {
  const inner = folder('2026', [
    fileEntry('p10.csv'),
    fileEntry('p2.csv'),
    fileEntry('.DS_Store'),
    fileEntry('Thumbs.db'),
  ]);
  const found = await droppedFiles(dropOf(folder('trends', [inner, fileEntry('z.csv')]), fileEntry('own.csv')));
  expect(found.map(({ name }) => name)).toEqual(['p2.csv', 'p10.csv', 'z.csv', 'own.csv']);
});

test('a drop without folders is its files', async () => {
  const found = await droppedFiles(dropOf(fileEntry('own.csv')));
  expect(found.map(({ name }) => name)).toEqual(['flat.csv']);
});
