import { beforeEach, describe, expect, test } from 'vitest';
import type { WorkerProgram } from '@/jobs/worker-program';
import { zipOf } from '../trends/container-support';
import {
  blocksOf,
  carriedOf,
  confirmColumns,
  receive,
  record,
  setJobScene,
  startWorker,
  untilStatus,
  uploadState,
  type JobScene,
} from './job-scene';

let scene: JobScene;
let worker: WorkerProgram;

beforeEach(async () => {
  scene = await setJobScene();
  worker = await startWorker(scene);
  return async () => {
    await worker.stop();
    await scene.close();
  };
});

/** The wide record's columns and rows. */
function cellsOf(wide: string): { names: string[]; rows: string[][] } {
  const [heading, ...lines] = wide.trimEnd().split('\n');
  return { names: heading!.split(',').slice(1), rows: lines.map((line) => line.split(',')) };
}

/** The same record with a row a reading. */
function longOf(wide: string): string {
  const { names, rows } = cellsOf(wide);
  const lines = rows.flatMap(([time, ...values]) => values.map((value, i) => `${time},${names[i]},${value}`));
  return `Timestamp,Point,Value\n${lines.join('\n')}\n`;
}

/** The same record with a file for each point, in one archive. */
function zipOfPoints(wide: string): Buffer {
  const { names, rows } = cellsOf(wide);
  return zipOf(
    names.map((name, i) => ({
      name: `export/${name}_2026-06-01.csv`,
      content: `Timestamp,Value\n${rows.map((cells) => `${cells[0]},${cells[i + 1]}`).join('\n')}\n`,
    })),
  );
}

const mapped = async (): Promise<number> =>
  (await scene.owner.query(`select 1 from mapping where plant_id = $1`, [scene.plantId])).rowCount ?? 0;
const previewOf = async (id: string) =>
  (
    await scene.owner.query<{
      preview: { columns: { column: string; known?: boolean }[]; problems: { code: string }[] };
    }>(`select preview from upload where id = $1`, [id])
  ).rows[0]!.preview;

/** What is stored of a record that came as a wide file: the reference for other shapes of it. */
async function storedAsWide(wide: string): Promise<string> {
  const id = await receive(scene, 'wide.csv', wide);
  await untilStatus(scene, id, 'needs-mapping');
  await confirmColumns(scene, id);
  await untilStatus(scene, id, 'done');
  const { hash } = await blocksOf(scene);
  await scene.owner.query(`delete from sample_layer where plant_id = $1`, [scene.plantId]);
  await scene.owner.query(`delete from sample_block where plant_id = $1`, [scene.plantId]);
  await scene.owner.query(`delete from mapping where plant_id = $1`, [scene.plantId]);
  return hash;
}

describe('the same record in another shape is stored the same', () => {
  test.each([
    ['a row a reading', 'long.csv', (wide: string): string | Buffer => longOf(wide)],
    ['an archive of one file a point', 'points.zip', zipOfPoints],
  ])('%s', async (_, filename, dress) => {
    const wide = record('2026-06-01', 2);
    const hash = await storedAsWide(wide);
    const id = await receive(scene, filename, dress(wide));
    await untilStatus(scene, id, 'needs-mapping');
    await confirmColumns(scene, id);
    expect(await untilStatus(scene, id, 'done', 'failed')).toMatchObject({ status: 'done', problems: [] });
    expect((await blocksOf(scene)).hash).toBe(hash);
    // The next drop of that shape goes straight through.
    const next = await receive(scene, filename, dress(record('2026-06-05', 1)));
    expect((await untilStatus(scene, next, 'done', 'needs-mapping', 'failed')).status).toBe('done');
    expect((await blocksOf(scene)).days).toBe(3);
  });
});

describe('a heading that changed', () => {
  const withColumn = (wide: string, name: string, value: string) =>
    wide
      .trimEnd()
      .split('\n')
      .map((line, i) => `${line},${i === 0 ? name : value}`)
      .join('\n');
  const first = async () => {
    const id = await receive(scene, 'first.csv', record('2026-06-01', 1));
    await untilStatus(scene, id, 'needs-mapping');
    await confirmColumns(scene, id);
    await untilStatus(scene, id, 'done');
  };

  test('asks only about its new column', async () => {
    await first();
    const id = await receive(scene, 'wider.csv', withColumn(record('2026-06-02', 1), 'Plant kW', '310'));
    await untilStatus(scene, id, 'needs-mapping');
    const { columns } = await previewOf(id);
    expect(columns.filter(({ known }) => !known).map(({ column }) => column)).toEqual(['Plant kW']);
  });

  test('goes straight through when it only lost a column, and says which', async () => {
    await first();
    const narrower = record('2026-06-02', 1).replace(/,[^,\n]*$/gm, '');
    const id = await receive(scene, 'narrower.csv', narrower);
    const state = await untilStatus(scene, id, 'done', 'needs-mapping', 'failed');
    expect(state.status).toBe('done');
    expect(state.problems).toContainEqual(expect.objectContaining({ code: 'column-gone' }));
    expect(state.problems.find(({ code }) => code === 'column-gone')?.message).toContain('"S Flow gpm"');
  });

  test('is asked about anew when it has hardly anything in common', async () => {
    await first();
    const other = record('2026-06-02', 1).replace('P Sup T (F),S Sup T (F),S Ret T (F),P Ret T (F)', 'A,B,C,D');
    const id = await receive(scene, 'other.csv', other);
    await untilStatus(scene, id, 'needs-mapping');
    expect((await previewOf(id)).columns.some(({ known }) => known)).toBe(false);
  });
});

describe('a new point in a file with a row a reading', () => {
  test('is asked about alone, and the old ones are remembered when it stays away', async () => {
    const wide = record('2026-06-01', 1);
    const id = await receive(scene, 'a.csv', longOf(wide));
    await untilStatus(scene, id, 'needs-mapping');
    await confirmColumns(scene, id);
    await untilStatus(scene, id, 'done');
    const more = `${longOf(record('2026-06-02', 1))}2026-06-02T00:00:00.000Z,Plant kW,310\n2026-06-02T00:01:00.000Z,Plant kW,311\n`;
    const second = await receive(scene, 'b.csv', more);
    await untilStatus(scene, second, 'needs-mapping');
    const { columns } = await previewOf(second);
    expect(columns.filter(({ known }) => !known).map(({ column }) => column)).toEqual(['Plant kW']);
    await confirmColumns(scene, second, ({ column }) =>
      column === 'Plant kW' ? { role: 'plantPower', unit: 'kW' } : {},
    );
    await untilStatus(scene, second, 'done');
    const third = await receive(scene, 'c.csv', longOf(record('2026-06-03', 1)));
    expect((await untilStatus(scene, third, 'done', 'needs-mapping', 'failed')).status).toBe('done');
    expect(await mapped()).toBe(1);
  });
});

describe('a mapping that was wrong', () => {
  test('is changed on the finished upload: the stored file is read again and nothing of the first reading stays', async () => {
    const wide = record('2026-06-01', 2);
    const right = await storedAsWide(wide);
    const id = await receive(scene, 'week.csv', wide);
    await untilStatus(scene, id, 'needs-mapping');
    // Supply and return exchanged, and one column left out.
    await confirmColumns(scene, id, ({ column }) => {
      if (column === 'P Sup T (F)') return { role: 'primaryReturnTemp' };
      if (column === 'P Ret T (F)') return { role: 'primarySupplyTemp' };
      return column === 'S Flow gpm' ? { role: 'ignore', unit: null } : {};
    });
    await untilStatus(scene, id, 'done');
    expect((await blocksOf(scene)).hash).not.toBe(right);
    await confirmColumns(scene, id);
    await untilStatus(scene, id, 'received', 'importing', 'analysing', 'done');
    await untilStatus(scene, id, 'done');
    expect((await blocksOf(scene)).hash).toBe(right);
  });
});

describe('a second meter that comes in a file of its own', () => {
  const meters = async () =>
    (
      await scene.owner.query<{ source_name: string }>(
        `select source_name from point where plant_id = $1 and role = 'secondaryFlow' order by ordinal`,
        [scene.plantId],
      )
    ).rows.map(({ source_name }) => source_name);
  const branch = () =>
    record('2026-06-01', 1)
      .split('\n')
      .map((line) => {
        const cells = line.split(',');
        return [cells[0], cells[3], cells[6]].join(',');
      })
      .join('\n')
      .replace('S Flow gpm', 'East Loop S Flow gpm')
      .replace('S Ret T (F)', 'East Loop S Ret T (F)');

  test.each([
    ['goes on with the one there when nobody says otherwise', false, ['East Loop S Flow gpm']],
    ['is a further one where that is said', true, ['S Flow gpm', 'East Loop S Flow gpm']],
  ])('%s', async (_, further, names) => {
    const first = await receive(scene, 'plant.csv', record('2026-06-01', 1));
    await untilStatus(scene, first, 'needs-mapping');
    await confirmColumns(scene, first);
    await untilStatus(scene, first, 'done');
    const second = await receive(scene, 'east.csv', branch());
    await untilStatus(scene, second, 'needs-mapping');
    expect((await carriedOf(scene, second)).find(({ role }) => role === 'secondaryFlow')?.names).toEqual([
      'S Flow gpm',
    ]);
    await confirmColumns(scene, second, ({ column }) =>
      column === 'East Loop S Flow gpm'
        ? { role: 'secondaryFlow', unit: 'gpm', further }
        : { role: 'secondaryReturnTemp', unit: 'degF' },
    );
    await untilStatus(scene, second, 'done');
    expect(await meters()).toEqual(names);
  });
});

test('the same bytes again are said to be the same, and change nothing', async () => {
  const wide = record('2026-06-01', 1);
  const id = await receive(scene, 'once.csv', wide);
  await untilStatus(scene, id, 'needs-mapping');
  await confirmColumns(scene, id);
  await untilStatus(scene, id, 'done');
  const before = await blocksOf(scene);
  const again = await receive(scene, 'twice.csv', wide);
  await untilStatus(scene, again, 'done');
  const { problems } = await uploadState(scene, again);
  expect(problems).toContainEqual(expect.objectContaining({ code: 'same-file' }));
  expect(problems.find(({ code }) => code === 'same-file')?.message).toContain('"once.csv"');
  expect(await blocksOf(scene)).toEqual(before);
});
