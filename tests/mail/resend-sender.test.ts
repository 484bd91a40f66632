import { http, HttpResponse, delay } from 'msw';
import { setupServer } from 'msw/node';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { resendSender } from '@/lib/mail/resend-sender';
import { MailUnavailable } from '@/lib/mail/sender';

const BASE = 'https://mail.test';
const server = setupServer();
beforeAll(() => server.listen({ onUnhandledRequest: 'error' }));
afterEach(() => server.resetHandlers());
afterAll(() => server.close());

const sender = resendSender({
  apiKey: 're_test',
  baseUrl: BASE,
  from: 'Slackwater <alerts@slackwater.example>',
  timeoutMs: 300,
});
const mail = {
  to: 'operator@tern-quay.example',
  subject: 'It ran backwards',
  text: 'It ran backwards.',
  html: '<p>It ran backwards.</p>',
  headers: { 'List-Unsubscribe': '<https://slackwater.example/a/x/stop-mail>' },
  idempotencyKey: 'alert-delivery/1',
};
const answers = (status: number, name: string, message = 'in words') =>
  server.use(http.post(`${BASE}/emails`, () => HttpResponse.json({ statusCode: status, name, message }, { status })));

describe('resendSender', () => {
  it('sends key, sender, one recipient, headers and the idempotency key, and gives the service’s id', async () => {
    let seen: { headers: Headers; body: unknown } | null = null;
    server.use(
      http.post(`${BASE}/emails`, async ({ request }) => {
        seen = { headers: request.headers, body: await request.json() };
        return HttpResponse.json({ id: 'mail-1' });
      }),
    );
    expect(await sender.send(mail)).toEqual({ kind: 'sent', providerId: 'mail-1' });
    const { headers, body } = seen as unknown as { headers: Headers; body: Record<string, unknown> };
    expect(headers.get('authorization')).toBe('Bearer re_test');
    expect(headers.get('idempotency-key')).toBe('alert-delivery/1');
    expect(body).toEqual({
      from: 'Slackwater <alerts@slackwater.example>',
      to: ['operator@tern-quay.example'],
      subject: mail.subject,
      text: mail.text,
      html: mail.html,
      headers: mail.headers,
    });
  });

  it.each([
    [500, 'internal_server_error'],
    [503, 'application_error'],
    [429, 'rate_limit_exceeded'],
    [409, 'concurrent_idempotent_requests'],
  ])('throws on %i %s, which asking again may mend', async (status, name) => {
    answers(status, name);
    await expect(sender.send(mail)).rejects.toThrow(MailUnavailable);
  });

  it('throws on an answer of 502 that is no JSON', async () => {
    server.use(http.post(`${BASE}/emails`, () => new HttpResponse('<html>bad gateway</html>', { status: 502 })));
    await expect(sender.send(mail)).rejects.toThrow(MailUnavailable);
  });

  it('throws when no answer comes at all', async () => {
    server.use(http.post(`${BASE}/emails`, () => HttpResponse.error()));
    await expect(sender.send(mail)).rejects.toThrow(MailUnavailable);
  });

  it('gives up on a service that does not answer in time', async () => {
    server.use(
      http.post(`${BASE}/emails`, async () => {
        await delay('infinite');
        return HttpResponse.json({ id: 'never' });
      }),
    );
    await expect(sender.send(mail)).rejects.toThrow(MailUnavailable);
  });

  it('stops, and says it was stopped, when the job is taken away', async () => {
    const control = new AbortController();
    server.use(
      http.post(`${BASE}/emails`, async () => {
        control.abort(new Error('the job was taken'));
        await delay('infinite');
        return HttpResponse.json({ id: 'never' });
      }),
    );
    await expect(sender.send(mail, control.signal)).rejects.toThrow('the job was taken');
  });

  it.each([
    [401, 'missing_api_key'],
    [403, 'invalid_api_key'],
    [422, 'validation_error'],
  ])('gives a refusal of %i in words', async (status, name) => {
    answers(status, name, 'Invalid `to` field.');
    expect(await sender.send(mail)).toEqual({
      kind: 'refused',
      words: `The mail service refused the mail (${status}): Invalid \`to\` field.`,
    });
  });

  it('takes a key used with other words for a mail that is out already', async () => {
    answers(409, 'invalid_idempotent_request');
    expect(await sender.send(mail)).toEqual({ kind: 'sent', providerId: null });
  });
});
