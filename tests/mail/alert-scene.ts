import { randomUUID } from 'node:crypto';
import pg from 'pg';
import { addLocalDays, localParts, startOfLocalDay } from '@/lib/client/format-time';
import { writeResults } from '@/lib/db/blocks';
import { dayOf, daysBetween, dayStartMs } from '@/lib/db/days';
import { closeOrm, configureOrm } from '@/lib/db/orm';
import { withTenant } from '@/lib/db/tenant';
import { DIRECTIONS, RESULT_CHANNELS, STATES, type ResultChannel } from '@/lib/hydronics/types';
import { localHours } from '@/lib/queries/local-hours';

/** An invented organization with a plant and its people, as the alert's tests need it, in a database of their own. */
export const STEP_MINUTES = 5;
const SLOTS = 1440 / STEP_MINUTES;

export interface Urls {
  ownerUrl: string;
  appUrl: string;
  workerUrl: string;
}
export interface Interval {
  startMs: number;
  /** Net bypass flow; negative is reverse. */
  bypassFlowGpm: number;
  blendedSupplyF: number;
}

/** Says which program's database role the code under test runs with. */
export async function runAs(urls: Urls, program: 'web' | 'worker'): Promise<void> {
  await closeOrm();
  configureOrm(program === 'web' ? urls.appUrl : urls.workerUrl, 4);
}

export class AlertScene {
  readonly organizationId = randomUUID();
  readonly plantId = randomUUID();

  private constructor(
    readonly owner: pg.Client,
    readonly timeZone: string,
  ) {}

  static async create(owner: pg.Client, timeZone = 'America/New_York'): Promise<AlertScene> {
    const scene = new AlertScene(owner, timeZone);
    const { organizationId, plantId } = scene;
    await owner.query(`insert into organization (id, name) values ($1, 'Tern Quay Hospital campus')`, [organizationId]);
    await owner.query(
      `insert into plant (id, organization_id, name, time_zone, arrangement, step_minutes) values ($1, $2, 'East energy centre', $3, 'primary-secondary', $4)`,
      [plantId, organizationId, timeZone, STEP_MINUTES],
    );
    await owner.query(
      `insert into plant_settings (organization_id, plant_id, revision, settings) values ($1, $2, 1, $3)`,
      [
        organizationId,
        plantId,
        JSON.stringify({
          design: {
            productionSupplyF: 44,
            productionUnits: ['A', 'B', 'C'].map((name) => ({ name, tons: 450, flowGpm: 860 })),
          },
          tariff: { currency: 'USD', energyPerKwh: 0.14 },
        }),
      ],
    );
    await owner.query(`insert into alert_rule (organization_id, plant_id, min_reverse_minutes) values ($1, $2, 30)`, [
      organizationId,
      plantId,
    ]);
    return scene;
  }

  async person(role: string, email = `${randomUUID()}@tern-quay.example`): Promise<{ id: string; email: string }> {
    const { rows } = await this.owner.query<{ id: string }>(
      `insert into app_user (email, name, password_hash) values ($1, 'Kit Moor', 'x') returning id`,
      [email],
    );
    const id = rows[0]?.id ?? '';
    await this.owner.query(`insert into membership (organization_id, user_id, role) values ($1, $2, $3)`, [
      this.organizationId,
      id,
      role,
    ]);
    return { id, email };
  }

  /** The run that the schedule would claim for a day. */
  async run(day: string): Promise<{ organizationId: string; runId: string }> {
    const { rows } = await this.owner.query<{ id: string }>(
      `insert into alert_run (organization_id, plant_id, day) values ($1, $2, $3)
       on conflict (plant_id, day) do update set outcome = 'pending' returning id`,
      [this.organizationId, this.plantId, day],
    );
    return { organizationId: this.organizationId, runId: rows[0]?.id ?? '' };
  }

  async outcome(day: string): Promise<{ outcome: string; detail: string }> {
    const { rows } = await this.owner.query<{ outcome: string; detail: string }>(
      `select outcome, detail from alert_run where plant_id = $1 and day = $2`,
      [this.plantId, day],
    );
    return rows[0] ?? { outcome: 'no run', detail: '' };
  }

  async deliveries(): Promise<
    { id: string; email: string; status: string; failure: string | null; subject: string }[]
  > {
    return (
      await this.owner.query<{ id: string; email: string; status: string; failure: string | null; subject: string }>(
        `select id, email, status, failure, subject from alert_delivery where plant_id = $1 order by email`,
        [this.plantId],
      )
    ).rows;
  }

  /**
   * Stores a local day: `bypass` gives the net flow of each interval by its local hour and minute. Supply to the buildings is
   * 44 F, and 1 F warmer for each 200 gpm backward. Two of three units run and make 1,720 gpm.
   */
  async storeDay(day: string, bypass: (hour: number, minute: number, startMs: number) => number): Promise<Interval[]> {
    const fromMs = startOfLocalDay(day, this.timeZone);
    const toMs = startOfLocalDay(addLocalDays(day, 1), this.timeZone);
    const intervals: Interval[] = [];
    for (let startMs = fromMs; startMs < toMs; startMs += STEP_MINUTES * 60_000) {
      const { hour, minute } = localParts(startMs, this.timeZone);
      const bypassFlowGpm = bypass(hour, minute, startMs);
      intervals.push({ startMs, bypassFlowGpm, blendedSupplyF: 44 + Math.max(0, -bypassFlowGpm) / 200 });
    }
    await this.storeResults(intervals, fromMs, toMs);
    await this.storeHours(day, intervals, fromMs, toMs);
    return intervals;
  }

  private async storeResults(intervals: readonly Interval[], fromMs: number, toMs: number): Promise<void> {
    const days = daysBetween(dayOf(fromMs), dayOf(toMs - 1)).map((day) => {
      const channels = Object.fromEntries(
        RESULT_CHANNELS.map((channel) => [channel, new Float32Array(SLOTS).fill(NaN)]),
      ) as Record<ResultChannel, Float32Array>;
      channels.direction.fill(DIRECTIONS.indexOf('unknown'));
      channels.state.fill(STATES.indexOf('unknown'));
      for (const { startMs, bypassFlowGpm: net, blendedSupplyF } of intervals) {
        const slot = (startMs - dayStartMs(day)) / (STEP_MINUTES * 60_000);
        if (slot < 0 || slot >= SLOTS) continue;
        channels.direction[slot] = DIRECTIONS.indexOf(net < 0 ? 'reverse' : net > 0 ? 'forward' : 'still');
        channels.state[slot] = STATES.indexOf('running');
        channels.bypass_flow_gpm[slot] = net;
        channels.bypass_flow_lo_gpm[slot] = net - 90;
        channels.bypass_flow_hi_gpm[slot] = net + 90;
        channels.blended_supply_f[slot] = blendedSupplyF;
        channels.primary_supply_f[slot] = 44;
        channels.primary_flow_gpm[slot] = 1720;
        channels.secondary_flow_gpm[slot] = 1720 - net;
      }
      return { day, inputHash: randomUUID(), channels };
    });
    const owner = { organizationId: this.organizationId, plantId: this.plantId };
    await withTenant({ organizationIds: [this.organizationId] }, (em) =>
      writeResults(em, { ...owner, stepMinutes: STEP_MINUTES, settingsRevision: 1, kernelVersion: 'test' }, days),
    );
  }

  private async storeHours(day: string, intervals: readonly Interval[], fromMs: number, toMs: number): Promise<void> {
    const sum = (values: readonly number[]) => values.reduce((total, value) => total + value, 0);
    const starts = localHours(this.timeZone, fromMs, toMs);
    for (const [at, { startMs }] of starts.entries()) {
      const own = intervals.filter(
        (each) => each.startMs >= startMs && each.startMs < (starts[at + 1]?.startMs ?? toMs),
      );
      const back = own.filter((each) => each.bypassFlowGpm < 0);
      const minutes = (list: readonly Interval[]) => list.length * STEP_MINUTES;
      await this.owner.query(
        `insert into hour (organization_id, plant_id, hour_start, local_day, low, cause, running_minutes, reverse_minutes, forward_minutes,
           still_minutes, unknown_minutes, bypass_flow_gpm, reverse_flow_gpm, excess_flow_gpm, excess_cost, units_running, quality)
         values ($1, $2, $3, $4, $5, $6, $7, $8, $9, $10, 0, $11, $12, $13, $14, 2, 1)`,
        [
          this.organizationId,
          this.plantId,
          new Date(startMs).toISOString(),
          day,
          back.length > 0,
          back.length > 0 ? 'reverse-flow' : 'none',
          minutes(own),
          minutes(back),
          minutes(own.filter((each) => each.bypassFlowGpm > 0)),
          minutes(own.filter((each) => each.bypassFlowGpm === 0)),
          own.length === 0 ? null : sum(own.map((each) => each.bypassFlowGpm)) / own.length,
          back.length === 0 ? null : -sum(back.map((each) => each.bypassFlowGpm)) / back.length,
          back.length * 10,
          back.length * 0.25,
        ],
      );
    }
    const back = intervals.filter((each) => each.bypassFlowGpm < 0);
    await this.owner.query(
      `insert into plant_day (organization_id, plant_id, day, reverse_minutes, unknown_minutes, running_minutes, largest_reverse_flow_gpm,
         warmest_supply_f, low_hours, excess_cost, excess_energy_kwh, coverage, worst_hour)
       select $1, $2, $3, $4, 0, $5, $6, $7, count(*) filter (where low), sum(excess_cost), 100, 1,
         (array_agg(hour_start order by excess_flow_gpm desc, hour_start))[1]
       from hour where plant_id = $2 and local_day = $3`,
      [
        this.organizationId,
        this.plantId,
        day,
        back.length * STEP_MINUTES,
        intervals.length * STEP_MINUTES,
        back.length === 0 ? null : Math.max(...back.map((each) => -each.bypassFlowGpm)),
        Math.max(...intervals.map((each) => each.blendedSupplyF)),
      ],
    );
  }
}
