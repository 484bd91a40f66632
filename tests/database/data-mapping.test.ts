import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { DELETE as deleteUpload, GET as getUpload } from '@/app/api/v1/uploads/[uploadId]/route';
import { PUT as putMapping } from '@/app/api/v1/uploads/[uploadId]/mapping/route';
import { GET as getPreview } from '@/app/api/v1/uploads/[uploadId]/preview/route';
import { ask } from '../support/api';
import { problemOf, setScene, type Scene } from './data-scene';

let scene: Scene;
let uploadId: string;
let serial = 0;
beforeAll(async () => {
  scene = await setScene();
});
afterAll(() => scene.api.close());

const column = (name: string, role: string, unit: string | null, unitIndex: number | null = null) => ({
  column: name,
  role,
  unit,
  unitIndex,
  confidence: 0.9,
  reason: 'Its name says so.',
  samples: [44, null],
  low: 44,
  high: 44,
});
/** As the import job leaves it. */
const PREVIEW = {
  dialect: { encoding: 'utf-8', delimiter: ',', decimal: '.', headerRow: 1, unitRow: null, firstDataRow: 2 },
  timestamp: { columns: ['Time'], form: 'iso' },
  timeZone: 'America/Denver',
  stepMinutes: 5,
  columns: [
    column('CHWS', 'primarySupplyTemp', 'degF'),
    column('CHWR', 'primaryReturnTemp', 'degC'),
    column('FLOW', 'primaryFlow', 'gpm'),
    column('CH1', 'unitStatus', 'on/off', 1),
    column('NOTE', 'ignore', null),
  ],
  rows: [['2026-07-01T00:00Z', '44', '12', '900', 'on', '']],
  firstRows: 1,
  problems: [],
  fingerprint: '',
};
/** What the mapping page sends: the preview itself, keys and all. */
const suggestion = () => ({ ...PREVIEW, remember: true });

beforeEach(async () => {
  uploadId = await insertUpload('needs-mapping', `heading-${++serial}`);
});

async function insertUpload(status: string, fingerprint: string | null): Promise<string> {
  const { rows } = await scene.api.owner.query<{ id: string }>(
    `insert into upload (organization_id, plant_id, upload_seq, filename, status, preview) values ($1, $2, $3, 'week.csv', $4, $5) returning id`,
    [scene.organizationId, scene.plantId, ++serial, status, fingerprint && JSON.stringify({ ...PREVIEW, fingerprint })],
  );
  return rows[0]?.id ?? '';
}

const confirm = (json: object, cookie = scene.engineer.cookie) =>
  ask(putMapping, 'PUT', { params: { uploadId }, json, cookie });
const withColumn = (index: number, change: object) => ({
  ...suggestion(),
  columns: PREVIEW.columns.map((each, at) => (at === index ? { ...each, ...change } : each)),
});
async function stored() {
  const { rows } = await scene.api.owner.query<{
    status: string;
    confirmed: { columns: { column: string }[] } | null;
    remembered: object | null;
    jobs: number;
    removed_at: Date | null;
    applied: boolean;
  }>(
    `select u.status, u.confirmed, u.removed_at, u.applied,
       (select m.confirmed from mapping m where m.plant_id = u.plant_id and m.fingerprint = u.preview->>'fingerprint') as remembered,
       (select count(*)::int from pgboss.job j where j.data->>'uploadId' = u.id::text) as jobs
     from upload u where u.id = $1`,
    [uploadId],
  );
  return rows[0];
}

describe('a preview', () => {
  it('is what the import found, in the words of the contract', async () => {
    const response = await ask(getPreview, 'GET', { params: { uploadId }, cookie: scene.engineer.cookie });
    expect(response.status).toBe(200);
    expect(await response.json()).toMatchObject({ ...PREVIEW, fingerprint: `heading-${serial - 1}` });
  });

  it.each([
    ['receiving', /still being received/],
    ['received', /still being looked at/],
    ['failed', /could not be read/],
  ])('of an upload that is %s is a 409 that says why there is none', async (status, words) => {
    uploadId = await insertUpload(status, null);
    const { status: code, detail } = await problemOf(
      await ask(getPreview, 'GET', { params: { uploadId }, cookie: scene.engineer.cookie }),
    );
    expect(code).toBe(409);
    expect(detail).toMatch(words);
  });
});

describe('a mapping', () => {
  it('sent back as it was suggested is confirmed, remembered by its heading, and read on', async () => {
    const response = await confirm(suggestion());
    expect([response.status, await response.json()]).toEqual([202, { id: uploadId, status: 'received' }]);
    const row = await stored();
    expect(row).toMatchObject({ status: 'received', jobs: 1 });
    expect(row?.confirmed).toMatchObject({ timestamp: PREVIEW.timestamp, timeZone: 'America/Denver' });
    expect(row?.confirmed?.columns[1]).toEqual({
      column: 'CHWR',
      role: 'primaryReturnTemp',
      unit: 'degC',
      unitIndex: null,
    });
    const { timestamp, timeZone, columns } = row?.confirmed as Record<string, unknown>;
    expect(row?.remembered).toEqual({ timestamp, timeZone, columns });
  });

  it('is not remembered when nobody asks for it', async () => {
    expect((await confirm({ ...suggestion(), remember: false })).status).toBe(202);
    expect(await stored()).toMatchObject({ status: 'received', remembered: null });
  });

  it('takes the place of the one remembered for the same heading before', async () => {
    await confirm(suggestion());
    const heading = `heading-${serial - 1}`;
    uploadId = await insertUpload('needs-mapping', heading);
    await confirm(withColumn(2, { role: 'secondaryFlow' }));
    expect(JSON.stringify((await stored())?.remembered)).toContain('secondaryFlow');
  });

  it('takes one role in two units, a state without a unit, and only some of the columns', async () => {
    const columns = [
      { column: 'CHWS', role: 'primarySupplyTemp', unit: 'degF' },
      { column: 'CHWR', role: 'primarySupplyTemp', unit: 'degC' },
      { column: 'CH1', role: 'unitStatus', unit: null, unitIndex: 1 },
    ];
    expect((await confirm({ ...suggestion(), columns })).status).toBe(202);
    expect((await stored())?.confirmed?.columns[2]).toMatchObject({ unit: 'on/off' });
  });

  it.each([
    ['a column the file does not have', () => withColumn(0, { column: 'CHWX' }), 'columns.0.column'],
    ['a column twice', () => withColumn(1, { column: 'CHWS' }), 'columns.1.column'],
    ['a role without a unit', () => withColumn(2, { unit: null }), 'columns.2.unit'],
    ['a flow in degrees', () => withColumn(2, { unit: 'degF' }), 'columns.2.unit'],
    ['a role that does not exist', () => withColumn(2, { role: 'waterfall' }), 'columns.2.role'],
    [
      'a time column the file does not have',
      () => ({ ...suggestion(), timestamp: { columns: ['Zeit'], form: 'iso' } }),
      'timestamp.columns.0',
    ],
    ['a time zone that does not exist', () => ({ ...suggestion(), timeZone: 'Mars/Olympus' }), 'timeZone'],
  ])('with %s is a 400 that names the place, and changes nothing', async (_, mapping, path) => {
    const { status, paths } = await problemOf(await confirm(mapping()));
    expect([status, paths]).toEqual([400, [path]]);
    expect(await stored()).toMatchObject({ status: 'needs-mapping', confirmed: null, remembered: null, jobs: 0 });
  });

  it('without a temperature of the water is a 422 in words', async () => {
    const columns = [
      { column: 'CHWS', role: 'outdoorTemp', unit: 'degF' },
      { column: 'FLOW', role: 'primaryFlow', unit: 'gpm' },
    ];
    const { status, detail } = await problemOf(await confirm({ ...suggestion(), columns }));
    expect(status).toBe(422);
    expect(detail).toMatch(/no temperature of the water is mapped/i);
    expect(await stored()).toMatchObject({ status: 'needs-mapping', jobs: 0 });
  });

  it('is confirmed once: of two at the same time one gets a 409', async () => {
    const answers = await Promise.all([confirm(suggestion()), confirm(suggestion())]);
    expect(answers.map((each) => each.status).sort()).toEqual([202, 409]);
    expect((await stored())?.jobs).toBe(1);
  });

  it.each(['done', 'failed'])('of an upload that is %s is changed: the stored file is read again', async (status) => {
    uploadId = await insertUpload(status, 'heading-y');
    await scene.api.owner.query(`update upload set applied = status = 'done' where id = $1`, [uploadId]);
    expect((await confirm(withColumn(2, { role: 'secondaryFlow' }))).status).toBe(202);
    const row = await stored();
    expect(row).toMatchObject({ status: 'received', applied: false, jobs: 1 });
    expect(row?.confirmed?.columns[2]).toMatchObject({ role: 'secondaryFlow' });
  });

  it.each(['importing', 'analysing', 'receiving'])('of an upload that is %s is a 409', async (status) => {
    uploadId = await insertUpload(status, 'heading-x');
    expect((await confirm(suggestion())).status).toBe(409);
  });

  it('is the engineer’s: an operator and a consultant get a 403', async () => {
    expect((await confirm(suggestion(), scene.operator.cookie)).status).toBe(403);
    expect((await confirm(suggestion(), scene.consultant.cookie)).status).toBe(403);
    expect((await ask(getPreview, 'GET', { params: { uploadId }, cookie: scene.operator.cookie })).status).toBe(403);
  });
});

describe('removing an upload', () => {
  const remove = (cookie = scene.engineer.cookie) => ask(deleteUpload, 'DELETE', { params: { uploadId }, cookie });

  it('takes it out of sight at once, so that it no longer counts, and has the worker take its values out', async () => {
    await scene.api.owner.query(`update upload set status = 'done', applied = true where id = $1`, [uploadId]);
    expect((await remove()).status).toBe(204);
    const row = await stored();
    expect(row).toMatchObject({ applied: false, jobs: 1 });
    expect(row?.removed_at).not.toBeNull();
    expect((await ask(getUpload, 'GET', { params: { uploadId }, cookie: scene.engineer.cookie })).status).toBe(404);
    expect((await remove()).status).toBe(404);
    expect((await stored())?.jobs).toBe(1);
  });

  it('leaves a trace of who did it', async () => {
    await remove();
    const { rows } = await scene.api.owner.query(
      `select action, actor_user_id from audit_event where subject_id = $1`,
      [uploadId],
    );
    expect(rows).toEqual([{ action: 'upload.removed', actor_user_id: scene.engineer.userId }]);
  });
});
