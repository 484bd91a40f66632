import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { PATCH as patchEpisode } from '@/app/api/v1/episodes/[episodeId]/route';
import { PUT as putRule } from '@/app/api/v1/plants/[plantId]/alert-rule/route';
import { GET as readAlerts } from '@/app/api/v1/plants/[plantId]/alerts/route';
import { POST as runAlert } from '@/app/api/v1/plants/[plantId]/alerts/runs/route';
import { POST as createPlant } from '@/app/api/v1/plants/route';
import { Alerts } from '@/lib/schemas/alert';
import { Episode } from '@/lib/schemas/results';
import {
  ask,
  LEAST_PLANT,
  makeOrganization,
  makePerson,
  startTestApi,
  type Person,
  type TestApi,
} from '../support/api';

let api: TestApi;
let here: string;
let engineer: Person;
let consultant: Person;
let operator: Person;
let plantId: string;
beforeAll(async () => {
  api = await startTestApi();
  here = await makeOrganization(api);
  engineer = await makePerson(api, [[here, 'engineer']]);
  consultant = await makePerson(api, [[here, 'consultant']]);
  operator = await makePerson(api, [[here, 'operator']]);
  const made = await ask(createPlant, 'POST', { json: LEAST_PLANT, cookie: engineer.cookie });
  plantId = ((await made.json()) as { id: string }).id;
});
afterAll(() => api.close());

const params = () => ({ plantId });
const alerts = async (person = engineer) =>
  Alerts.parse(await (await ask(readAlerts, 'GET', { params: params(), cookie: person.cookie })).json());
const jobs = async (runId: string) =>
  (await api.owner.query(`select 1 from pgboss.job where name = 'daily-alert' and data ->> 'runId' = $1`, [runId]))
    .rowCount;

describe('the alert rule', () => {
  const rule = { enabled: true, minReverseMinutes: 45, minReverseFlowGpm: 50, sendAt: '05:45' };
  it('is set by an engineer and comes back as it was set', async () => {
    const response = await ask(putRule, 'PUT', { params: params(), json: rule, cookie: engineer.cookie });
    expect(response.status).toBe(200);
    expect(await response.json()).toEqual(rule);
    expect((await alerts()).rule).toEqual(rule);
  });
  it.each(['consultant', 'operator'] as const)('is not set by a %s', async (role) => {
    const person = { consultant, operator }[role];
    expect((await ask(putRule, 'PUT', { params: params(), json: rule, cookie: person.cookie })).status).toBe(403);
  });
  it('takes no time of day that does not exist', async () => {
    const json = { ...rule, sendAt: '24:10' };
    const response = await ask(putRule, 'PUT', { params: params(), json, cookie: engineer.cookie });
    expect(await response.json()).toMatchObject({ status: 400, errors: [{ path: 'sendAt' }] });
  });
});

describe('the alert of a plant', () => {
  it('names the operators who take mail, and no one else', async () => {
    const deaf = await makePerson(api, [[here, 'operator']]);
    await api.owner.query(`update app_user set mail_suppressed_at = now() where id = $1`, [deaf.userId]);
    expect((await alerts(operator)).recipients.map((each) => each.email)).toEqual([operator.email]);
  });
  it('shows the mails with who acknowledged them', async () => {
    await api.owner.query(
      `insert into alert_delivery (organization_id, plant_id, day, user_id, email, status, subject, sent_at, acknowledged_at)
       values ($1, $2, '2026-07-20', $3, $4, 'sent', 'Ran backwards', now(), now())`,
      [here, plantId, operator.userId, operator.email],
    );
    const [delivery] = (await alerts()).deliveries;
    expect(delivery).toMatchObject({ day: '2026-07-20', status: 'sent', subject: 'Ran backwards' });
    expect(delivery?.acknowledgedBy).toMatch(/^Person \d+$/);
  });
});

describe('evaluating a day now', () => {
  const run = (day: string, person = engineer, headers: Record<string, string> = {}) =>
    ask(runAlert, 'POST', { params: params(), json: { day }, cookie: person.cookie, headers });
  it('is queued, and asking again evaluates the same run', async () => {
    const first = await run('2026-07-21');
    expect(first.status).toBe(202);
    const { id } = (await first.json()) as { id: string };
    expect(await jobs(id)).toBe(1);
    await api.owner.query(`update alert_run set outcome = 'nothing-to-report', finished_at = now() where id = $1`, [
      id,
    ]);
    expect(await (await run('2026-07-21')).json()).toEqual({ id });
    expect(await jobs(id)).toBe(2);
    expect((await alerts()).runs).toMatchObject([{ id, day: '2026-07-21', outcome: 'pending' }]);
  });
  it('sent again with its Idempotency-Key is queued once', async () => {
    const headers = { 'idempotency-key': 'run' };
    const { id } = (await (await run('2026-07-22', engineer, headers)).json()) as { id: string };
    await run('2026-07-22', engineer, headers);
    expect(await jobs(id)).toBe(1);
  });
  it('is refused for a day that is not over at the plant', async () => {
    const today = new Intl.DateTimeFormat('en-CA', { timeZone: LEAST_PLANT.timeZone }).format(new Date());
    for (const day of [today, '2999-01-01']) {
      const response = await run(day);
      expect(await response.json()).toMatchObject({ status: 400, errors: [{ path: 'day' }] });
    }
  });
  it('is the owner’s and the engineer’s', async () => {
    for (const person of [consultant, operator]) expect((await run('2026-07-21', person)).status).toBe(403);
  });
});

describe('an episode', () => {
  const make = async () => {
    const { rows } = await api.owner.query<{ id: string }>(
      `insert into episode (organization_id, plant_id, cause, started_at, ended_at, hours, worst_hour, warmest_supply_f)
       values ($1, $2, 'reverse-flow', now() - random() * interval '9 days', now(), 3, now(), 50) returning id`,
      [here, plantId],
    );
    return rows[0]?.id ?? '';
  };
  const patch = (episodeId: string, json: object, person = operator, query = '') =>
    ask(patchEpisode, 'PATCH', {
      path: `/episodes/${episodeId}${query}`,
      params: { episodeId },
      json,
      cookie: person.cookie,
    });

  it('is acknowledged by an operator, with a note; the first to acknowledge stays named', async () => {
    const id = await make();
    const episode = Episode.parse(await (await patch(id, { acknowledged: true, note: ' pump 2 was off ' })).json());
    expect(episode.note).toBe('pump 2 was off');
    expect(episode.acknowledgedBy).not.toBeNull();
    const again = Episode.parse(await (await patch(id, { acknowledged: true }, engineer)).json());
    expect(again).toEqual(episode);
  });
  it('can be opened again and its note taken away', async () => {
    const id = await make();
    await patch(id, { acknowledged: true, note: 'seen' });
    const open = Episode.parse(await (await patch(id, { acknowledged: false, note: null })).json());
    expect(open).toMatchObject({ acknowledgedAt: null, acknowledgedBy: null, note: null });
  });
  it('keeps its acknowledgement when only the note changes', async () => {
    const id = await make();
    await patch(id, { acknowledged: true });
    const noted = Episode.parse(await (await patch(id, { note: 'later' })).json());
    expect(noted.acknowledgedAt).not.toBeNull();
  });
  it('answers in SI when asked', async () => {
    const episode = (await (await patch(await make(), { note: 'x' }, operator, '?units=si')).json()) as object;
    expect(episode).toMatchObject({ warmestSupplyC: 10 });
  });
  it('is not found by another organization, and wants something to change', async () => {
    const foreign = await makePerson(api, [[await makeOrganization(api), 'owner']]);
    expect((await patch(await make(), { acknowledged: true }, foreign)).status).toBe(404);
    expect((await patch(await make(), {})).status).toBe(400);
  });
});
