import pg from 'pg';
import { computeSlice } from '@/lib/commands/compute-slice';
import { ensurePoints } from '@/lib/commands/ensure-points';
import { settleAnalyses } from '@/lib/commands/finish-analysis';
import { lockPlant } from '@/lib/commands/lock-plant';
import { markChangedDays } from '@/lib/commands/mark-days-stale';
import { readSlice, type SliceInput } from '@/lib/commands/read-slice';
import { startAnalysis } from '@/lib/commands/start-analysis';
import { writeSlice } from '@/lib/commands/write-slice';
import { deriveBlocks, writeLayers, type PointDay } from '@/lib/db/blocks';
import { daysBetween } from '@/lib/db/days';
import { closeOrm, configureOrm } from '@/lib/db/orm';
import { withTenant } from '@/lib/db/tenant';
import { log } from '@/lib/log';
import { createTestDatabase } from '../support/database';

const STEP = 15;
const SLOTS = 1440 / STEP;
const ROLES = [
  'primarySupplyTemp',
  'secondarySupplyTemp',
  'secondaryReturnTemp',
  'primaryReturnTemp',
  'primaryFlow',
  'secondaryFlow',
] as const;
type Role = (typeof ROLES)[number];

/** Plants whose record is written day by day and analysed here and now, by the worker's role. */
export class CalibrationScene {
  private constructor(
    readonly owner: pg.Client,
    readonly organizationId: string,
    private readonly drop: () => Promise<void>,
  ) {}

  static async set(): Promise<CalibrationScene> {
    log.level = 'silent';
    const database = await createTestDatabase();
    const owner = new pg.Client({ connectionString: database.ownerUrl });
    await owner.connect();
    configureOrm(database.workerUrl);
    const { rows } = await owner.query<{ id: string }>(
      `insert into organization (name) values ('Sensors') returning id`,
    );
    return new CalibrationScene(owner, rows[0]?.id ?? '', async () => {
      await closeOrm();
      await owner.end();
      await database.drop();
    });
  }

  close = (): Promise<void> => this.drop();

  inTenant = <Result>(work: Parameters<typeof withTenant<Result>>[1]): Promise<Result> =>
    withTenant({ organizationIds: [this.organizationId] }, work);

  async plant(): Promise<ScenePlant> {
    const { rows } = await this.owner.query<{ id: string }>(
      `insert into plant (organization_id, name, time_zone, arrangement, step_minutes) values ($1, 'Plant', 'UTC', 'primary-secondary', $2) returning id`,
      [this.organizationId, STEP],
    );
    const plantId = rows[0]?.id ?? '';
    const unit = { tons: 450, flowGpm: 900 };
    const productionUnits = [
      { name: 'CH-1', ...unit },
      { name: 'CH-2', ...unit },
    ];
    const design = { productionSupplyF: 44, loadDeltaTF: 12, loadTons: 900, productionUnits };
    await this.owner.query(
      `insert into plant_settings (organization_id, plant_id, revision, settings) values ($1, $2, 1, $3)`,
      [this.organizationId, plantId, JSON.stringify({ design })],
    );
    return new ScenePlant(this, plantId);
  }
}

export class ScenePlant {
  private uploads = 0;
  constructor(
    private readonly scene: CalibrationScene,
    readonly plantId: string,
  ) {}

  get ids(): { organizationId: string; plantId: string } {
    return { organizationId: this.scene.organizationId, plantId: this.plantId };
  }

  /** Stores days as one upload of its own would leave them, and marks what that changes. */
  async store(from: string, to = from, warmerF = 0): Promise<void> {
    const uploadSeq = 1000 + (this.uploads += 1);
    await this.scene.owner.query(
      `insert into upload (organization_id, plant_id, upload_seq, filename, status, applied) values ($1, $2, $3, 'days', 'done', true)`,
      [this.scene.organizationId, this.plantId, uploadSeq],
    );
    const days = daysBetween(from, to);
    const owner = { ...this.ids, stepMinutes: STEP };
    await this.scene.inTenant(async (em) => {
      await lockPlant(em, owner);
      const columns = ROLES.map((role) => ({ column: role, role, unit: null, unitIndex: 0 }));
      const points = await ensurePoints(em, owner, columns);
      const samples = days.flatMap((day) =>
        ROLES.map((role, index): PointDay => ({
          pointId: points[index] ?? '',
          day,
          values: Float32Array.from({ length: SLOTS }, (_, slot) => valueOf(role, day, slot, warmerF)),
        })),
      );
      await writeLayers(em, { ...owner, uploadSeq }, samples);
      await markChangedDays(em, owner, await deriveBlocks(em, owner, days));
      await startAnalysis(em, { ...this.ids, onlyStale: true });
    });
  }

  /** Works out all stale days as the worker does; returns what each slice took. */
  async analyse(most = 50): Promise<{ days: string[]; kind: string }[]> {
    const slices: { days: string[]; kind: string }[] = [];
    for (;;) {
      const input = await readSlice(this.ids);
      if (input) {
        if (slices.length === most) throw new Error(`still stale after ${most} slices`);
        slices.push({ days: input.days, kind: input.calibration.kind });
        await this.write(input);
      }
      if ((await this.scene.inTenant((em) => settleAnalyses(em, this.ids))) === 'done') return slices;
    }
  }

  write(input: SliceInput): Promise<boolean> {
    const result = computeSlice(input);
    return this.scene.inTenant((em) => writeSlice(em, input, result));
  }

  async calibrations(): Promise<{ id: number; month: string; hash: string; detail: unknown }[]> {
    const { rows } = await this.scene.owner.query<{ id: number; month: string; hash: string; detail: unknown }>(
      `select id, to_char(valid_from, 'YYYY-MM') as month, input_hash as hash, detail from calibration where plant_id = $1 order by valid_from`,
      [this.plantId],
    );
    return rows;
  }

  /** The number of the calibration that each day's results name. */
  async named(): Promise<Record<string, number>> {
    const { rows } = await this.scene.owner.query<{ day: string; calibration_id: number }>(
      `select day::text, calibration_id from result_block where plant_id = $1 order by day`,
      [this.plantId],
    );
    return Object.fromEntries(rows.map((row) => [row.day, row.calibration_id]));
  }

  /** Everything worked out, without what tells one attempt from another: the calibrations, and all numbers of days and hours. */
  async answer(): Promise<Answer> {
    const { rows: blocks } = await this.scene.owner.query<{ day: string; r: Record<string, unknown> }>(
      `select b.day::text, to_jsonb(b) - '{plant_id,calibration_id,input_hash,day,organization_id,kernel_version}'::text[] as r
       from result_block b where plant_id = $1 order by b.day`,
      [this.plantId],
    );
    const { rows: hours } = await this.scene.owner.query<{ start: string; r: Record<string, unknown> }>(
      `select hour_start::text as start, to_jsonb(h) - '{plant_id,organization_id,hour_start,local_day}'::text[] as r
       from hour h where plant_id = $1 order by hour_start`,
      [this.plantId],
    );
    const { rows: named } = await this.scene.owner.query(
      `select r.day::text, c.valid_from::text as month from result_block r
       left join calibration c on c.plant_id = r.plant_id and c.id = r.calibration_id where r.plant_id = $1 order by r.day`,
      [this.plantId],
    );
    const calibrations = (await this.calibrations()).map(({ month, detail }) => ({ month, detail }));
    return {
      exact: { named, calibrations },
      numbers: new Map([
        ...blocks.flatMap(({ day, r }) => leaves(day, r)),
        ...hours.flatMap(({ start, r }) => leaves(start, r)),
      ]),
    };
  }
}

export interface Answer {
  exact: unknown;
  numbers: Map<string, unknown>;
}

/** Every number or word of a row by its place. */
function leaves(place: string, value: unknown): [string, unknown][] {
  if (value === null || typeof value !== 'object') return [[place, value]];
  return Object.entries(value).flatMap(([name, inner]) => leaves(`${place}/${name}`, inner));
}

/** A millionth: how much was read around a day may show in the last places of its sums, and nowhere else. */
const SAME = 1e-6;

/** The places at which two answers differ. */
export function differences(one: Answer, other: Answer): string[] {
  const same = (a: unknown, b: unknown) =>
    a === b ||
    (typeof a === 'number' && typeof b === 'number' && Math.abs(a - b) <= SAME * Math.max(1, Math.abs(a), Math.abs(b)));
  const places = new Set([...one.numbers.keys(), ...other.numbers.keys()]);
  return [
    ...(JSON.stringify(one.exact) === JSON.stringify(other.exact) ? [] : ['calibrations']),
    ...[...places].filter((place) => !same(one.numbers.get(place), other.numbers.get(place))),
  ];
}

/** Backward from noon to six and forward otherwise, each day with noise of its own, the secondary supply sensor 0.6 F warm. */
function valueOf(role: Role, day: string, slot: number, warmerF: number): number {
  const hour = (slot * STEP) / 60;
  const reverse = hour >= 12 && hour < 18;
  const [fp, fs] = [900, reverse ? 1200 : 700];
  const [tps, tsr] = [44 + warmerF, 56 + warmerF];
  const tss = reverse ? (fp * tps + (fs - fp) * tsr) / fs : tps;
  const tpr = reverse ? tsr : (fs * tsr + (fp - fs) * tps) / fp;
  const truth = [tps, tss + 0.6, tsr, tpr, fp, fs][ROLES.indexOf(role)] ?? NaN;
  return truth * (1 + 0.001 * scatter(Date.parse(day) / 864e5, slot, ROLES.indexOf(role)));
}

/** Fixed scatter between -1 and 1. */
const scatter = (a: number, b: number, c: number): number => {
  const x = Math.sin(a * 12.9898 + b * 78.233 + c * 37.719) * 43758.5453;
  return 2 * (x - Math.floor(x)) - 1;
};
