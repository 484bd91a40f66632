import { createHmac, randomUUID } from 'node:crypto';
import pg from 'pg';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { POST } from '@/app/api/v1/webhooks/resend/route';
import { closeOrm } from '@/lib/db/orm';
import { log } from '@/lib/log';
import { AlertScene, runAs } from '../mail/alert-scene';
import { createTestDatabase } from '../support/database';

const KEY = Buffer.from('the tests sign with this key');
let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: pg.Client;
let scene: AlertScene;

beforeAll(async () => {
  log.level = 'silent';
  vi.stubEnv('RESEND_WEBHOOK_SECRET', `whsec_${KEY.toString('base64')}`);
  database = await createTestDatabase();
  owner = new pg.Client({ connectionString: database.ownerUrl });
  await owner.connect();
  await runAs(database, 'web');
  scene = await AlertScene.create(owner);
});
afterAll(async () => {
  vi.unstubAllEnvs();
  await closeOrm();
  await owner.end();
  await database.drop();
});

function call(body: string, key = KEY): Promise<Response> {
  const timestamp = String(Math.floor(Date.now() / 1000));
  const signature = createHmac('sha256', key).update(`msg_1.${timestamp}.${body}`).digest('base64');
  const headers = { 'svix-id': 'msg_1', 'svix-timestamp': timestamp, 'svix-signature': `v1,${signature}` };
  return POST(new Request('http://localhost:3000/api/v1/webhooks/resend', { method: 'POST', headers, body }));
}
const event = (type: string, to: string, mail: string, bounce?: object) =>
  JSON.stringify({ type, data: { email_id: mail, to: [to], ...(bounce ? { bounce } : {}) } });
const bounce = { type: 'Permanent', subType: 'General', message: 'no such mailbox' };

async function sentTo(person: { id: string; email: string }): Promise<string> {
  const mail = randomUUID();
  await owner.query(
    `insert into alert_delivery (organization_id, plant_id, day, user_id, email, status, provider_id) values ($1, $2, '2026-07-24', $3, $4, 'sent', $5)`,
    [scene.organizationId, scene.plantId, person.id, person.email, mail],
  );
  return mail;
}
const suppressed = async ({ id }: { id: string }) =>
  (await owner.query(`select 1 from app_user where id = $1 and mail_suppressed_at is not null`, [id])).rows.length ===
  1;
const delivery = async (mail: string) =>
  (await owner.query(`select status, failure from alert_delivery where provider_id = $1`, [mail])).rows[0] as unknown;

describe('a call of the mail service', () => {
  it('of a bounce stops mail to the address and tells the delivery why it failed', async () => {
    const [person, other] = [await scene.person('operator'), await scene.person('operator')];
    const mail = await sentTo(person);
    const response = await call(event('email.bounced', person.email.toUpperCase(), mail, bounce));
    expect(response.status).toBe(200);
    expect(await suppressed(person)).toBe(true);
    expect(await suppressed(other)).toBe(false);
    expect(await delivery(mail)).toEqual({ status: 'failed', failure: 'The mail bounced: no such mailbox' });
  });

  it('of a complaint stops mail, and leaves the delivery sent', async () => {
    const person = await scene.person('operator');
    const mail = await sentTo(person);
    await call(event('email.complained', person.email, mail));
    expect(await suppressed(person)).toBe(true);
    expect(await delivery(mail)).toEqual({ status: 'sent', failure: null });
  });

  it('told twice is the same as once', async () => {
    const person = await scene.person('operator');
    const body = event('email.bounced', person.email, await sentTo(person), bounce);
    expect([(await call(body)).status, (await call(body)).status]).toEqual([200, 200]);
    expect(await suppressed(person)).toBe(true);
  });

  it('does not fail the delivery of someone else that it names', async () => {
    const [person, other] = [await scene.person('operator'), await scene.person('operator')];
    const mail = await sentTo(other);
    await call(event('email.bounced', person.email, mail, bounce));
    expect(await delivery(mail)).toEqual({ status: 'sent', failure: null });
  });

  it('about an address nobody here has is taken and changes nothing', async () => {
    expect((await call(event('email.bounced', 'nobody@nowhere.example', 'mail-0', bounce))).status).toBe(200);
  });

  it('signed with another key is refused as a problem and changes nothing', async () => {
    const person = await scene.person('operator');
    const response = await call(event('email.bounced', person.email, 'mail-0', bounce), Buffer.from('not the key'));
    expect(response.status).toBe(401);
    expect(response.headers.get('content-type')).toBe('application/problem+json');
    expect(await suppressed(person)).toBe(false);
  });

  it('that does not end is not read to its end', async () => {
    expect((await call('x'.repeat(300_000))).status).toBe(413);
  });

  it('is refused where no secret is set', async () => {
    vi.stubEnv('RESEND_WEBHOOK_SECRET', '');
    expect((await call('{}')).status).toBe(503);
    vi.stubEnv('RESEND_WEBHOOK_SECRET', `whsec_${KEY.toString('base64')}`);
  });
});
