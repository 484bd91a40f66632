import { http } from 'msw';
import { setupServer } from 'msw/node';
import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { DELETE as empty, GET as list } from '@/app/dev/mailbox/messages/route';
import { GET as read } from '@/app/dev/resend/emails/[id]/route';
import { POST as send } from '@/app/dev/resend/emails/route';
import { closeOrm } from '@/lib/db/orm';
import { resendSender } from '@/lib/mail/resend-sender';
import { runAs } from '../mail/alert-scene';
import { createTestDatabase } from '../support/database';

const BASE = 'http://127.0.0.1:3999/dev/resend';
let database: Awaited<ReturnType<typeof createTestDatabase>>;
// The SDK's own requests, answered by the fake's real handler.
const network = setupServer(http.post(`${BASE}/emails`, ({ request }) => send(request)));

beforeAll(async () => {
  vi.stubEnv('LOCAL_FAKES', '1');
  network.listen({ onUnhandledRequest: 'error' });
  database = await createTestDatabase();
  await runAs(database, 'web');
});
afterAll(async () => {
  vi.unstubAllEnvs();
  network.close();
  await closeOrm();
  await database.drop();
});
beforeEach(async () => {
  await empty();
});

const mail = {
  from: 'Slackwater <alerts@slackwater.example>',
  to: ['operator@demo.example'],
  subject: 'It ran backwards',
  html: '<p>It ran backwards.</p>',
  text: 'It ran backwards.',
};
const post = (body: unknown, headers: Record<string, string> = {}) =>
  send(
    new Request(`${BASE}/emails`, {
      method: 'POST',
      headers: { authorization: 'Bearer re_local', 'content-type': 'application/json', ...headers },
      body: typeof body === 'string' ? body : JSON.stringify(body),
    }),
  );
const answer = async (response: Promise<Response>) => {
  const { status, ...rest } = await response.then(async (each) => ({
    status: each.status,
    body: (await each.json()) as object,
  }));
  return { status, ...rest.body } as Record<string, unknown>;
};

describe('the local fake of the mail service', () => {
  it('takes a mail through the SDK and shows it in the mailbox as it was sent', async () => {
    const sender = resendSender({ apiKey: 're_local', baseUrl: BASE, from: mail.from });
    const headers = { 'List-Unsubscribe': '<https://slackwater.example/a/x>' };
    const sent = await sender.send({ ...mail, to: 'operator@demo.example', headers, idempotencyKey: 'key-1' });
    expect(sent).toEqual({ kind: 'sent', providerId: expect.any(String) as string });
    const mails = (await (await list()).json()) as object[];
    expect(mails).toEqual([
      {
        id: sent.kind === 'sent' ? sent.providerId : '',
        to: ['operator@demo.example'],
        subject: mail.subject,
        text: mail.text,
        html: mail.html,
        headers: { From: mail.from, ...headers },
        createdAt: expect.stringMatching(/^\d{4}-\d{2}-\d{2}T.*Z$/) as string,
      },
    ]);
  });

  it('lists newest first', async () => {
    for (const subject of ['first', 'second', 'third']) await post({ ...mail, subject });
    const mails = (await (await list()).json()) as { subject: string }[];
    expect(mails.map((each) => each.subject)).toEqual(['third', 'second', 'first']);
  });

  it('gives the same id for the same mail under one key, and keeps one', async () => {
    const first = await answer(post(mail, { 'idempotency-key': 'key-2' }));
    const again = await answer(post(mail, { 'idempotency-key': 'key-2' }));
    expect(again).toEqual(first);
    expect(await (await list()).json()).toHaveLength(1);
  });

  it('keeps one of two at once under one key', async () => {
    const both = await Promise.all([1, 2].map(() => answer(post(mail, { 'idempotency-key': 'key-3' }))));
    expect(both[0]).toEqual(both[1]);
    expect(await (await list()).json()).toHaveLength(1);
  });

  it('answers 409 to another mail under a key that was used', async () => {
    await post(mail, { 'idempotency-key': 'key-4' });
    expect(await answer(post({ ...mail, subject: 'Other' }, { 'idempotency-key': 'key-4' }))).toMatchObject({
      status: 409,
      name: 'invalid_idempotent_request',
    });
  });

  it('answers 401 without a key', async () => {
    expect(await answer(post(mail, { authorization: '' }))).toMatchObject({ status: 401, name: 'missing_api_key' });
  });

  it.each([
    ['no sender', { ...mail, from: undefined }, 'missing_required_field'],
    ['a sender that is no address', { ...mail, from: 'alerts' }, 'validation_error'],
    ['nobody to send to', { ...mail, to: [] }, 'missing_required_field'],
    ['a recipient that is no address', { ...mail, to: 'operator' }, 'validation_error'],
    ['no subject', { ...mail, subject: undefined }, 'missing_required_field'],
    ['neither html nor text', { ...mail, html: undefined, text: undefined }, 'missing_required_field'],
    ['no JSON', '{', 'validation_error'],
  ])('answers 422 to a mail with %s', async (_what, body, name) => {
    expect(await answer(post(body))).toMatchObject({ status: 422, statusCode: 422, name });
    expect(await (await list()).json()).toEqual([]);
  });

  it('answers 400 to a key that is too long', async () => {
    expect(await answer(post(mail, { 'idempotency-key': 'k'.repeat(257) }))).toMatchObject({
      status: 400,
      name: 'invalid_idempotency_key',
    });
  });

  it('reads a mail back by its id, and no other', async () => {
    const { id } = await answer(post(mail));
    const get = (wanted: string) =>
      read(new Request(`${BASE}/emails/${wanted}`, { headers: { authorization: 'Bearer re_local' } }), {
        params: Promise.resolve({ id: wanted }),
      });
    expect(await (await get(String(id))).json()).toMatchObject({
      object: 'email',
      id,
      to: mail.to,
      subject: mail.subject,
    });
    expect((await get(crypto.randomUUID())).status).toBe(404);
    expect((await get('mail-1')).status).toBe(404);
  });

  it('is not there without LOCAL_FAKES=1', async () => {
    vi.stubEnv('LOCAL_FAKES', '0');
    const statuses = [
      (await post(mail)).status,
      (await list()).status,
      (await empty()).status,
      (await read(new Request(BASE), { params: Promise.resolve({ id: crypto.randomUUID() }) })).status,
    ];
    vi.stubEnv('LOCAL_FAKES', '1');
    expect(statuses).toEqual([404, 404, 404, 404]);
    expect(await (await list()).json()).toEqual([]);
  });
});
