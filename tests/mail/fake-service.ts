import { http, HttpResponse } from 'msw';
import { setupServer } from 'msw/node';
import { isDeepStrictEqual } from 'node:util';
import { resendSender } from '@/lib/mail/resend-sender';

export interface TakenMail {
  to: string[];
  subject: string;
  text: string;
  html: string;
  headers: Record<string, string>;
}
type Answer = { status: number; name: string; message?: string };

/** The mail service as the SDK sees it over HTTP, with its idempotency keys; `refuse` makes it answer otherwise. */
export class FakeMailService {
  readonly base = 'https://mail.test';
  /** Mails that went out, in order: a replay of a key sends none. */
  sent: TakenMail[] = [];
  /** Keys of every request, replays included. */
  keys: string[] = [];
  refuse: (mail: TakenMail) => Answer | null = () => null;
  private readonly kept = new Map<string, { id: string; mail: TakenMail }>();
  private readonly server = setupServer(
    http.post(`${this.base}/emails`, async ({ request }) => {
      const mail = (await request.json()) as TakenMail;
      const key = request.headers.get('idempotency-key') ?? '';
      this.keys.push(key);
      const answer = this.refuse(mail);
      if (answer) {
        const { status, name, message = 'in words' } = answer;
        return HttpResponse.json({ statusCode: status, name, message }, { status });
      }
      const before = this.kept.get(key);
      if (before && !isDeepStrictEqual(before.mail, mail))
        return HttpResponse.json(
          { statusCode: 409, name: 'invalid_idempotent_request', message: 'Same key, other payload.' },
          { status: 409 },
        );
      if (before) return HttpResponse.json({ id: before.id });
      const id = `mail-${this.sent.push(mail)}`;
      this.kept.set(key, { id, mail });
      return HttpResponse.json({ id });
    }),
  );
  readonly sender = resendSender({
    apiKey: 're_test',
    baseUrl: this.base,
    from: 'Slackwater <alerts@slackwater.example>',
  });

  listen(): void {
    this.server.listen({ onUnhandledRequest: 'error' });
  }
  close(): void {
    this.server.close();
  }
  /** Forgets everything, keys included. */
  reset(): void {
    this.sent = [];
    this.keys = [];
    this.refuse = () => null;
    this.kept.clear();
  }
  to(): string[] {
    return this.sent.flatMap((mail) => mail.to).sort();
  }
}
