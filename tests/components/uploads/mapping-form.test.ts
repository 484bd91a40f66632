import { expect, test } from 'vitest';
import {
  carriedNames,
  clashWords,
  firstAnswers,
  mappingBody,
  openColumns,
  roleCounts,
  timesProblem,
  withoutOpen,
} from '@/components/uploads/mapping-form';
import { filesOfDay } from '@/components/uploads/uploads-words';
import { ConfirmMapping } from '@/lib/schemas/upload';
import type { Upload } from '@/lib/schemas/upload';
import { preview, previewColumn, previewTable } from '../../support/preview';

const columns = [
  previewColumn('A'),
  previewColumn('B', { confidence: 0.3 }),
  previewColumn('C', { role: 'primaryFlow', unit: null }),
];

test('a guess under one half, and a unit that is not known, are left open', () => {
  expect(openColumns(firstAnswers(preview({ columns })).columns).map(({ column }) => column)).toEqual(['B', 'C']);
});

test('leaving out everything undecided decides everything and changes nothing else', () => {
  const { columns: answers } = firstAnswers(preview({ columns }));
  const after = withoutOpen(answers);
  expect(openColumns(after)).toEqual([]);
  expect(after[0]).toBe(answers[0]);
  expect(after[1]).toMatchObject({ role: 'ignore', unit: null });
});

test('a role that another file’s point carries is asked about, for the same unit alone, and the answer goes to the API', () => {
  const found = preview({
    columns: [previewColumn('A', { role: 'unitFlow', unit: 'gpm', unitIndex: 2 })],
    carried: [{ role: 'unitFlow', unitIndex: 2, names: ['FM-2'] }],
  });
  const answers = firstAnswers(found);
  const [answer] = answers.columns;
  expect(carriedNames(found, answer!)).toEqual(['FM-2']);
  expect(carriedNames(found, { ...answer!, unitIndex: 1 })).toBeNull();
  expect(carriedNames(found, { ...answer!, role: 'ignore' })).toBeNull();
  const said = { ...answers, columns: [{ ...answer!, further: true }] };
  expect(mappingBody(found, said, true).columns).toEqual([
    { column: 'A', role: 'unitFlow', unit: 'gpm', unitIndex: 2, further: true },
  ]);
  expect(mappingBody(found, answers, true).columns[0]).not.toHaveProperty('further');
});

test('of an upload that was read, the confirmed answers are shown; a column nobody answered was left out', () => {
  const timestamp = { columns: ['Timestamp'], form: 'iso' as const };
  const confirmed: ConfirmMapping = {
    timestamp,
    timeZone: 'Europe/Zurich',
    remember: true,
    columns: [{ column: 'A', role: 'secondarySupplyTemp', unit: 'degC' }],
  };
  const answers = firstAnswers(preview({ columns, confirmed }));
  expect(answers.timeZone).toBe('Europe/Zurich');
  expect(answers.columns.map(({ role }) => role)).toEqual(['secondarySupplyTemp', 'ignore', 'ignore']);
  expect(answers.columns[0]?.unit).toBe('degC');
});

test('several columns of one role: temperatures averaged, flows added up, other units apart', () => {
  const answers = firstAnswers(
    preview({
      columns: [
        previewColumn('A'),
        previewColumn('B'),
        previewColumn('C', { role: 'primaryFlow', unit: 'gpm' }),
        previewColumn('D', { role: 'primaryFlow', unit: 'gpm' }),
        previewColumn('E', { role: 'unitFlow', unit: 'gpm', unitIndex: 1 }),
        previewColumn('F', { role: 'unitFlow', unit: 'gpm', unitIndex: 2 }),
      ],
    }),
  ).columns;
  const counts = roleCounts(answers);
  expect(answers.map((answer) => clashWords(counts, answer))).toEqual([
    '2 columns have this role: averaged.',
    '2 columns have this role: averaged.',
    '2 columns have this role: added up.',
    '2 columns have this role: added up.',
    null,
    null,
  ]);
});

test('the body of a drop has a plan for each table and is what the API takes', () => {
  const drop = preview({
    tables: [previewTable(), previewTable({ timestamp: { columns: ['Zeit'], form: 'iso' } })],
    columns: [previewColumn('A'), previewColumn('B', { table: 1, role: 'primaryReturnTemp' })],
  });
  const answers = firstAnswers(drop);
  const body = mappingBody(drop, { ...answers, timeZone: 'UTC' }, false);
  expect(ConfirmMapping.safeParse(body).success).toBe(true);
  expect(body.tables?.map(({ timestamp }) => timestamp.columns)).toEqual([['Timestamp'], ['Zeit']]);
  expect(body.timestamp).toEqual(body.tables?.[0]?.timestamp);
  expect(body).toMatchObject({ timeZone: 'UTC', remember: false });
});

test('a zone that is none, a year that is missing and a shift over two days are said', () => {
  const answers = firstAnswers(preview());
  const [time] = answers.times;
  if (!time) throw new Error('no times');
  expect(timesProblem(answers)).toBeNull();
  expect(timesProblem({ ...answers, timeZone: 'Mars/Olympus' })).toContain('Mars/Olympus');
  expect(timesProblem({ ...answers, times: [{ ...time, form: 'day/month' }] })).toBe('Give the year of the first row');
  expect(timesProblem({ ...answers, times: [{ ...time, shiftMinutes: 3000 }] })).toContain('two days');
});

test('the files of a day are those with times in it, the latest received first', () => {
  const upload = (filename: string, from: string, to: string, createdAt: string, samplesStored = 9): Upload =>
    ({ filename, from, to, createdAt, samplesStored }) as Upload;
  const uploads = [
    upload('new.csv', '2026-07-08T12:00:00Z', '2026-07-09T12:00:00Z', '2026-08-02T00:00:00Z'),
    upload('old.csv', '2026-07-01T06:00:00Z', '2026-07-09T05:55:00Z', '2026-08-01T00:00:00Z'),
    upload('none.csv', '2026-07-08T06:00:00Z', '2026-07-08T07:00:00Z', '2026-08-03T00:00:00Z', 0),
  ];
  expect(filesOfDay(uploads, '2026-07-08', 'America/Denver')).toBe(
    'Files that reach into it, the latest first: new.csv, old.csv.',
  );
  // 06:00 UTC is midnight in Denver: the old file ends five minutes before the ninth begins there.
  expect(filesOfDay(uploads, '2026-07-09', 'America/Denver')).toBe('From new.csv.');
  expect(filesOfDay(uploads, '2026-06-30', 'America/Denver')).toBe('');
});
