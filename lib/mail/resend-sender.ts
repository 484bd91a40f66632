import { Resend, type ErrorResponse } from 'resend';
import { MailUnavailable, type MailSender, type OutgoingMail, type SendAnswer } from './sender';

const TIMEOUT_MS = 20_000;
/** Request timeout, too early, rate limit: statuses of 4xx that say "later", not "never" (RFC 9110, RFC 8470, RFC 6585). */
const LATER = new Set([408, 425, 429]);

export interface ResendSettings {
  apiKey: string;
  /** The service's own address when absent. */
  baseUrl?: string;
  /** `name@domain` or `Name <name@domain>`. */
  from: string;
  timeoutMs?: number;
}

/** Sends mail through the Resend SDK; in development its base URL is the project's own fake. */
export function resendSender({ apiKey, baseUrl, from, timeoutMs = TIMEOUT_MS }: ResendSettings): MailSender {
  const resend = new Resend(apiKey, baseUrl === undefined ? undefined : { baseUrl });
  return {
    async send(mail: OutgoingMail, signal?: AbortSignal): Promise<SendAnswer> {
      signal?.throwIfAborted();
      const timeout = AbortSignal.timeout(timeoutMs);
      const { data, error } = await resend.emails.send(
        { from, to: [mail.to], subject: mail.subject, text: mail.text, html: mail.html, headers: mail.headers },
        { idempotencyKey: mail.idempotencyKey, signal: signal ? AbortSignal.any([signal, timeout]) : timeout },
      );
      signal?.throwIfAborted();
      return error ? answerTo(error) : { kind: 'sent', providerId: data.id };
    },
  };
}

/** The SDK gives errors as values, a null status when no answer came. */
function answerTo(error: ErrorResponse): SendAnswer {
  const { name, message } = error;
  const status = error.statusCode ?? null;
  // This key has sent a mail before, with other words: figures were worked out again between two tries. One mail is enough.
  if (name === 'invalid_idempotent_request') return { kind: 'sent', providerId: null };
  const later = status === null || status >= 500 || LATER.has(status);
  if (later || name === 'concurrent_idempotent_requests')
    throw new MailUnavailable(`The mail service could not take the mail (${status ?? 'no answer'}): ${message}`);
  return { kind: 'refused', words: `The mail service refused the mail (${status}): ${message}` };
}
