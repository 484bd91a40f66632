import pg from 'pg';
import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import NotePage from '@/app/a/[token]/note/page';
import AcknowledgePage from '@/app/a/[token]/page';
import StopPage from '@/app/a/[token]/stop/page';
import { POST as acknowledge } from '@/app/a/[token]/acknowledge/route';
import { POST as resumeMail } from '@/app/a/[token]/resume-mail/route';
import { GET as openStop, POST as stopMail } from '@/app/a/[token]/stop-mail/route';
import { POST as undo } from '@/app/a/[token]/undo/route';
import { closeOrm } from '@/lib/db/orm';
import { deliveryToken } from '@/lib/mail/delivery-token';
import { AlertScene, runAs } from '../mail/alert-scene';
import { createTestDatabase } from '../support/database';

const SECRET = 'a secret of the tests, longer than thirty-two characters';
const DAY = '2026-07-24';
let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: pg.Client;
let scene: AlertScene;
let operator: { id: string; email: string };

beforeAll(async () => {
  vi.stubEnv('APP_SECRET', SECRET);
  database = await createTestDatabase();
  owner = new pg.Client({ connectionString: database.ownerUrl });
  await owner.connect();
  await runAs(database, 'web');
});
afterAll(async () => {
  vi.unstubAllEnvs();
  await closeOrm();
  await owner.end();
  await database.drop();
});
beforeEach(async () => {
  scene = await AlertScene.create(owner);
  operator = await scene.person('operator');
});

async function delivery(of = scene, person = operator): Promise<{ id: string; token: string }> {
  const { rows } = await owner.query<{ id: string }>(
    `insert into alert_delivery (organization_id, plant_id, day, user_id, email, status, subject, sent_at)
     values ($1, $2, $3, $4, $5, 'sent', 'East energy centre ran backwards 7 h', now()) returning id`,
    [of.organizationId, of.plantId, DAY, person.id, person.email],
  );
  const id = rows[0]?.id ?? '';
  return { id, token: deliveryToken(id, SECRET) };
}

/** An episode of the plant, given by its hours in New York on the day. */
async function episode(from: string, to: string, acknowledgedBy: string | null = null): Promise<string> {
  const { rows } = await owner.query<{ id: string }>(
    `insert into episode (organization_id, plant_id, cause, started_at, ended_at, hours, worst_hour, acknowledged_by, acknowledged_at)
     values ($1, $2, 'reverse-flow', $3, $4, 1, $3, $5, case when $5::uuid is not null then now() - interval '1 hour' end) returning id`,
    [scene.organizationId, scene.plantId, `${from} America/New_York`, `${to} America/New_York`, acknowledgedBy],
  );
  return rows[0]?.id ?? '';
}

interface EpisodeRow {
  id: string;
  acknowledged_by: string | null;
  note: string | null;
}
const episodes = async (): Promise<Map<string, EpisodeRow>> => {
  const { rows } = await owner.query<EpisodeRow>(`select id, acknowledged_by, note from episode where plant_id = $1`, [
    scene.plantId,
  ]);
  return new Map(rows.map((row) => [row.id, row]));
};
const acknowledgedAt = async (id: string): Promise<string | null> =>
  (
    await owner.query<{ at: string | null }>(`select acknowledged_at::text as at from alert_delivery where id = $1`, [
      id,
    ])
  ).rows[0]?.at ?? null;

type Handler = typeof acknowledge;
const post = (handler: Handler, token: string, form?: Record<string, string>, accept = 'application/json') =>
  handler(
    new Request('http://localhost:3000/', {
      method: 'POST',
      headers: { accept },
      ...(form ? { body: new URLSearchParams(form) } : {}),
    }),
    { params: Promise.resolve({ token }) },
  );
const at = (token: string) => ({ params: Promise.resolve({ token }), searchParams: Promise.resolve({}) });

describe('opening the link', () => {
  it('changes nothing, because mail scanners follow links', async () => {
    const { id, token } = await delivery();
    const inside = await episode('2026-07-24 12:00', '2026-07-24 19:00');
    await AcknowledgePage(at(token));
    await NotePage(at(token));
    await StopPage(at(token));
    const gone = await openStop(new Request('http://localhost:3000/'), at(token));
    expect(gone.status).toBe(303);
    expect(gone.headers.get('location')).toBe(`/a/${token}/stop`);
    expect(await acknowledgedAt(id)).toBeNull();
    expect((await episodes()).get(inside)?.acknowledged_by).toBeNull();
    const { rows } = await owner.query(`select 1 from app_user where id = $1 and mail_suppressed_at is null`, [
      operator.id,
    ]);
    expect(rows).toHaveLength(1);
  });

  it.each([
    ['a tampered token', (token: string) => `${token.slice(0, -1)}${token.endsWith('A') ? 'B' : 'A'}`],
    ['a token of nothing', () => 'x'],
    [
      'a token under another secret',
      () => deliveryToken(crypto.randomUUID(), 'another secret altogether, thirty-two+'),
    ],
    ['a token of a delivery that does not exist', () => deliveryToken(crypto.randomUUID(), SECRET)],
  ])('is a 404 with %s', async (_what, change) => {
    const { token } = await delivery();
    await expect(AcknowledgePage(at(change(token)))).rejects.toMatchObject({
      digest: expect.stringContaining('404') as string,
    });
  });
});

describe('acknowledging', () => {
  it('marks the delivery and the episodes that touch its local day, and no other', async () => {
    const { id, token } = await delivery();
    const inside = await episode('2026-07-24 12:00', '2026-07-24 19:00');
    const across = await episode('2026-07-23 22:00', '2026-07-24 01:00');
    const before = await episode('2026-07-23 20:00', '2026-07-24 00:00');
    const after = await episode('2026-07-25 00:00', '2026-07-25 02:00');
    const response = await post(acknowledge, token);
    expect(response.status).toBe(200);
    expect(await response.json()).toEqual({
      acknowledgedAt: expect.stringMatching(/^\d{2}:\d{2}$/) as string,
      canUndo: true,
    });
    expect(await acknowledgedAt(id)).not.toBeNull();
    const found = await episodes();
    expect([inside, across].map((each) => found.get(each)?.acknowledged_by)).toEqual([operator.id, operator.id]);
    expect([before, after].map((each) => found.get(each)?.acknowledged_by)).toEqual([null, null]);
  });

  it('tells the time on the plant’s clock', async () => {
    const { id, token } = await delivery();
    await post(acknowledge, token);
    const { rows } = await owner.query<{ clock: string }>(
      `select to_char(acknowledged_at at time zone 'America/New_York', 'HH24:MI') as clock from alert_delivery where id = $1`,
      [id],
    );
    expect(await (await post(acknowledge, token)).json()).toMatchObject({ acknowledgedAt: rows[0]?.clock });
  });

  it('counts once: again keeps the first time', async () => {
    const { id, token } = await delivery();
    await post(acknowledge, token);
    const first = await acknowledgedAt(id);
    await post(acknowledge, token);
    expect(await acknowledgedAt(id)).toBe(first);
    const { rows } = await owner.query(`select 1 from audit_event where organization_id = $1`, [scene.organizationId]);
    expect(rows).toHaveLength(1);
  });

  it('leaves who acknowledged an episode before as it was', async () => {
    const engineer = await scene.person('engineer');
    const earlier = await episode('2026-07-24 12:00', '2026-07-24 19:00', engineer.id);
    await post(acknowledge, (await delivery()).token);
    expect((await episodes()).get(earlier)?.acknowledged_by).toBe(engineer.id);
  });

  it('takes a note along to the day’s episodes, once however often the form is sent', async () => {
    const { token } = await delivery();
    const inside = await episode('2026-07-24 12:00', '2026-07-24 19:00');
    const response = await post(acknowledge, token, { note: ' Unit C was out for service. ' }, 'text/html');
    expect(response.status).toBe(303);
    expect(response.headers.get('location')).toBe(`/a/${token}`);
    await post(acknowledge, token, { note: 'Unit C was out for service.' });
    expect((await episodes()).get(inside)?.note).toBe('Unit C was out for service.');
    await post(acknowledge, token, { note: 'Back in at noon.' });
    expect((await episodes()).get(inside)?.note).toBe('Unit C was out for service.\nBack in at noon.');
  });

  it('is written to the audit trail under the person the mail went to', async () => {
    const { id, token } = await delivery();
    await post(acknowledge, token);
    const { rows } = await owner.query(
      `select actor_user_id, action, subject_id from audit_event where organization_id = $1`,
      [scene.organizationId],
    );
    expect(rows).toEqual([{ actor_user_id: operator.id, action: 'delivery.acknowledged', subject_id: id }]);
  });

  it('touches no other delivery: each token opens its own', async () => {
    const mine = await delivery();
    const other = await delivery(scene, await scene.person('operator'));
    await post(acknowledge, mine.token);
    expect(await acknowledgedAt(other.id)).toBeNull();
    const swapped = mine.token.slice(0, 22) + other.token.slice(22);
    expect((await post(acknowledge, swapped)).status).toBe(404);
    expect(await acknowledgedAt(other.id)).toBeNull();
  });

  it('is refused to someone who has left the organization', async () => {
    const { id, token } = await delivery();
    await owner.query(`delete from membership where user_id = $1`, [operator.id]);
    expect((await post(acknowledge, token)).status).toBe(404);
    expect(await acknowledgedAt(id)).toBeNull();
  });

  it('is refused after 30 days', async () => {
    const { id, token } = await delivery();
    await owner.query(`update alert_delivery set created_at = now() - interval '31 days' where id = $1`, [id]);
    expect((await post(acknowledge, token)).status).toBe(404);
    expect(await acknowledgedAt(id)).toBeNull();
  });
});

describe('undoing', () => {
  it('takes back the delivery and its own episodes, not those of others', async () => {
    const engineer = await scene.person('engineer');
    const { id, token } = await delivery();
    const earlier = await episode('2026-07-24 02:00', '2026-07-24 03:00', engineer.id);
    const mineBefore = await episode('2026-07-24 06:00', '2026-07-24 07:00', operator.id);
    const inside = await episode('2026-07-24 12:00', '2026-07-24 19:00');
    await post(acknowledge, token);
    const response = await post(undo, token);
    expect(await response.json()).toEqual({ acknowledgedAt: null, canUndo: false });
    expect(await acknowledgedAt(id)).toBeNull();
    const found = await episodes();
    expect(found.get(inside)?.acknowledged_by).toBeNull();
    expect(found.get(earlier)?.acknowledged_by).toBe(engineer.id);
    expect(found.get(mineBefore)?.acknowledged_by).toBe(operator.id);
  });

  it('leads a plain form to a page that does not acknowledge again by itself', async () => {
    const { token } = await delivery();
    await post(acknowledge, token);
    const response = await post(undo, token, {}, 'text/html');
    expect([response.status, response.headers.get('location')]).toEqual([303, `/a/${token}?undone=1`]);
  });

  it('works for an hour, then no more', async () => {
    const { id, token } = await delivery();
    await post(acknowledge, token);
    await owner.query(`update alert_delivery set acknowledged_at = now() - interval '61 minutes' where id = $1`, [id]);
    expect(await (await post(undo, token)).json()).toMatchObject({ canUndo: false });
    expect(await acknowledgedAt(id)).not.toBeNull();
  });

  it('of what nobody acknowledged changes nothing', async () => {
    const { token } = await delivery();
    expect(await (await post(undo, token)).json()).toEqual({ acknowledgedAt: null, canUndo: false });
  });
});

describe('stopping the mails', () => {
  const stopped = async () =>
    (await owner.query(`select 1 from app_user where id = $1 and mail_suppressed_at is not null`, [operator.id])).rows
      .length === 1;

  it('takes one POST, such as a mail program’s own button sends, and another takes it back', async () => {
    const { token } = await delivery();
    const response = await post(stopMail, token, { 'List-Unsubscribe': 'One-Click' }, '*/*');
    expect(response.status).toBe(303);
    expect(await stopped()).toBe(true);
    await post(resumeMail, token);
    expect(await stopped()).toBe(false);
  });

  it('stops nobody’s mail with a token that was changed', async () => {
    const { token } = await delivery();
    const changed = `${token.slice(0, -1)}${token.endsWith('A') ? 'B' : 'A'}`;
    expect((await post(stopMail, changed)).status).toBe(404);
    expect(await stopped()).toBe(false);
  });
});
