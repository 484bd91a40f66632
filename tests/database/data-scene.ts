import { POST as createPlant } from '@/app/api/v1/plants/route';
import { writeLayers, deriveBlocks, writeResults, type PointDay } from '@/lib/db/blocks';
import { closeOrm, configureOrm } from '@/lib/db/orm';
import { withTenant } from '@/lib/db/tenant';
import { DIRECTIONS, REASONS, RESULT_CHANNELS, STATES, type ResultChannel } from '@/lib/hydronics/types';
import type { Role } from '@/lib/schemas/common';
import {
  ask,
  LEAST_PLANT,
  makeOrganization,
  makePerson,
  startTestApi,
  type Ask,
  type Person,
  type TestApi,
} from '../support/api';

export const STEP = 5;
export const SLOTS = 1440 / STEP;
/** The clocks of Denver go back on the second of these: its local day has 25 hours. */
export const DAYS = ['2026-10-31', '2026-11-01', '2026-11-02'] as const;

export interface Scene {
  api: TestApi;
  organizationId: string;
  plantId: string;
  owner: Person;
  engineer: Person;
  operator: Person;
  consultant: Person;
}

/** A plant in Denver with one person of each role, and nothing recorded yet. */
export async function setScene(): Promise<Scene> {
  const api = await startTestApi();
  const organizationId = await makeOrganization(api);
  const person = (role: Role) => makePerson(api, [[organizationId, role]]);
  const owner = await person('owner');
  const engineer = await person('engineer');
  const operator = await person('operator');
  const consultant = await person('consultant');
  const tariff = { currency: 'USD', energyPerKwh: 0.14 };
  const made = await ask(createPlant, 'POST', { json: { ...LEAST_PLANT, tariff }, cookie: engineer.cookie });
  const { id: plantId } = (await made.json()) as { id: string };
  return { api, organizationId, plantId, owner, engineer, operator, consultant };
}

/** Does `work` as the worker would: the app's own role may not write samples or results. */
export async function asWorker<Result>(scene: Scene, work: () => Promise<Result>): Promise<Result> {
  await closeOrm();
  configureOrm(scene.api.workerUrl);
  try {
    return await work();
  } finally {
    await closeOrm();
    configureOrm(scene.api.appUrl);
  }
}

export async function insertPoint(scene: Scene, role: string, unitIndex = 0, ordinal = 0): Promise<string> {
  const { rows } = await scene.api.owner.query<{ id: string }>(
    `insert into point (organization_id, plant_id, role, unit_index, ordinal, source_name) values ($1, $2, $3, $4, $5, $6) returning id`,
    [scene.organizationId, scene.plantId, role, unitIndex, ordinal, `${role} ${unitIndex} ${ordinal}`],
  );
  return rows[0]?.id ?? '';
}

/** Writes day blocks as an import leaves them: layers of one applied upload, derived. */
export async function writeSamples(
  scene: Scene,
  samples: readonly { pointId: string; day: string; value: (slot: number) => number }[],
): Promise<void> {
  const { organizationId, plantId } = scene;
  await scene.api.owner.query(
    `insert into upload (organization_id, plant_id, upload_seq, filename, status, applied) values ($1, $2, 900, 'scene.csv', 'done', true)
     on conflict (plant_id, upload_seq) do nothing`,
    [organizationId, plantId],
  );
  const days = samples.map(({ pointId, day, value }): PointDay => ({
    pointId,
    day,
    values: Float32Array.from({ length: SLOTS }, (_, slot) => value(slot)),
  }));
  await asWorker(scene, () =>
    withTenant({ organizationIds: [organizationId] }, async (em) => {
      const owner = { organizationId, plantId, stepMinutes: STEP };
      await writeLayers(em, { ...owner, uploadSeq: 900 }, days);
      await deriveBlocks(em, owner, [...new Set(days.map((each) => each.day))]);
    }),
  );
}

const FORWARD = DIRECTIONS.indexOf('forward');
const REVERSE = DIRECTIONS.indexOf('reverse');
const UNKNOWN = DIRECTIONS.indexOf('unknown');
const RUNNING = STATES.indexOf('running');

/** Forward by 200 gpm before noon UTC, backward by 300 from noon on: each number is one a test can name. */
const FORWARD_SLOT: Partial<Record<ResultChannel, number>> = {
  direction: FORWARD,
  reverse_probability: 0.02,
  bypass_flow_gpm: 200,
  bypass_flow_lo_gpm: 150,
  bypass_flow_hi_gpm: 250,
  blended_supply_f: 44,
  blended_supply_lo_f: 43.75,
  blended_supply_hi_f: 44.25,
  primary_flow_gpm: 1000,
  secondary_flow_gpm: 800,
  primary_supply_f: 44,
  primary_return_f: 54,
  secondary_return_f: 56.5,
  load_tons: 416.5,
  load_delta_t_f: 12.5,
  production_delta_t_f: 10,
};
const REVERSE_SLOT: Partial<Record<ResultChannel, number>> = {
  direction: REVERSE,
  reverse_probability: 0.99,
  bypass_flow_gpm: -300,
  bypass_flow_lo_gpm: -400,
  bypass_flow_hi_gpm: -150,
  blended_supply_f: 47,
  blended_supply_lo_f: 46.5,
  blended_supply_hi_f: 47.5,
  primary_flow_gpm: 900,
  secondary_flow_gpm: 1200,
  primary_supply_f: 44,
  primary_return_f: 56,
  secondary_return_f: 56,
  load_tons: 450,
  load_delta_t_f: 9,
  production_delta_t_f: 12,
};
const COMMON: Partial<Record<ResultChannel, number>> = { steady: 1, quality: 1, state: RUNNING, reason: 0 };
const NO_DATA: Partial<Record<ResultChannel, number>> = {
  direction: UNKNOWN,
  steady: 0,
  quality: 0,
  state: STATES.indexOf('unknown'),
  reason: REASONS.indexOf('no data'),
};
/** Of the third day only the first 20 hours are there. */
export const LAST_SLOT = 240;

const slotOf = (day: string, slot: number): Partial<Record<ResultChannel, number>> =>
  day === DAYS[2] && slot >= LAST_SLOT ? NO_DATA : { ...COMMON, ...(slot < SLOTS / 2 ? FORWARD_SLOT : REVERSE_SLOT) };

/** Writes the estimates of DAYS, and notes them as the plant's extent of data. */
export async function writeEstimates(scene: Scene): Promise<void> {
  const { organizationId, plantId } = scene;
  const days = DAYS.map((day) => ({
    day,
    inputHash: day,
    channels: Object.fromEntries(
      RESULT_CHANNELS.map((channel) => [
        channel,
        Float32Array.from({ length: SLOTS }, (_, slot) => slotOf(day, slot)[channel] ?? NaN),
      ]),
    ) as Record<ResultChannel, Float32Array>,
  }));
  await asWorker(scene, () =>
    withTenant({ organizationIds: [organizationId] }, (em) =>
      writeResults(
        em,
        { organizationId, plantId, stepMinutes: STEP, settingsRevision: 1, kernelVersion: 'test' },
        days,
      ),
    ),
  );
  await scene.api.owner.query(
    `update plant set data_from = '2026-10-31T00:00Z', data_through = '2026-11-02T19:55Z' where id = $1`,
    [plantId],
  );
}

/** A row of the hour table; what is not given is nothing. */
export async function insertHour(scene: Scene, hour: Record<string, unknown> & { hour_start: string }): Promise<void> {
  const row = {
    organization_id: scene.organizationId,
    plant_id: scene.plantId,
    local_day: hour.hour_start.slice(0, 10),
    low: true,
    running_minutes: 60,
    reverse_minutes: 0,
    forward_minutes: 0,
    still_minutes: 0,
    unknown_minutes: 0,
    cause: 'none',
    ...hour,
  };
  const names = Object.keys(row);
  await scene.api.owner.query(
    `insert into hour (${names.join(', ')}) values (${names.map((_, index) => `$${index + 1}`).join(', ')})`,
    Object.values(row),
  );
}

type Handler = Parameters<typeof ask>[0];

/** Sends a body as it is, the way `ask` sends JSON. */
export async function send(
  handler: Handler,
  method: string,
  options: Omit<Ask, 'json'> & { body: BodyInit; length?: number },
): Promise<Response> {
  const headers = new Headers({ host: '127.0.0.1:3000', ...options.headers });
  if (options.cookie !== undefined) {
    headers.set('cookie', options.cookie);
    headers.set('origin', 'http://127.0.0.1:3000');
  }
  if (options.token !== undefined) headers.set('authorization', `Bearer ${options.token}`);
  if (options.length !== undefined) headers.set('content-length', String(options.length));
  const request = new Request(`http://localhost:3000/api/v1${options.path ?? '/'}`, {
    method,
    headers,
    body: options.body,
    duplex: 'half',
  } as RequestInit);
  return handler(request, { params: Promise.resolve(options.params ?? {}) });
}

export const problemOf = async (response: Response): Promise<{ status: number; detail: string; paths: string[] }> => {
  const body = (await response.json()) as { status: number; detail: string; errors?: { path: string }[] };
  return { status: body.status, detail: body.detail, paths: (body.errors ?? []).map(({ path }) => path) };
};
