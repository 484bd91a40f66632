export interface OutgoingMail {
  to: string;
  subject: string;
  text: string;
  html: string;
  headers?: Record<string, string>;
  /** The same key never sends twice, however often the mail service is asked (it keeps keys for 24 hours). */
  idempotencyKey: string;
}

/** What the mail service said: taken (with its id where it gave one), or refused for good, in words. */
export type SendAnswer = { kind: 'sent'; providerId: string | null } | { kind: 'refused'; words: string };

export interface MailSender {
  /** Throws MailUnavailable when asking again later may help: no answer, an answer of 5xx, or a rate limit. */
  send(mail: OutgoingMail, signal?: AbortSignal): Promise<SendAnswer>;
}

/** The mail service cannot take mail just now. */
export class MailUnavailable extends Error {
  override readonly name = 'MailUnavailable';
}
