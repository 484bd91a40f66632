import { Resend } from 'resend';
import { z } from 'zod';
import type { Suppression } from './suppression';

const Event = z.object({
  type: z.string(),
  data: z
    .object({
      email_id: z.string().default(''),
      to: z.union([z.string().transform((one) => [one]), z.array(z.string())]).default([]),
      bounce: z.object({ type: z.string().optional(), message: z.string().optional() }).optional(),
    })
    .optional(),
});
export type MailEvent = z.output<typeof Event>;

/**
 * The event of a webhook call, when its signature is the mail service's own and not older than five minutes; null otherwise.
 * `body` is the text as it came, to the byte.
 */
export function verifiedEvent(body: string, headers: Headers, webhookSecret: string): MailEvent | null {
  const read = (name: string) => headers.get(`svix-${name}`) ?? headers.get(`webhook-${name}`) ?? '';
  try {
    // Verifying asks nothing of the service: the SDK wants a key to be made at all.
    const event: unknown = new Resend('re_unused').webhooks.verify({
      payload: body,
      headers: { id: read('id'), timestamp: read('timestamp'), signature: read('signature') },
      webhookSecret,
    });
    return Event.parse(event);
  } catch {
    return null;
  }
}

/**
 * Whose mail an event stops. A bounce that is said to pass (a full mailbox) stops nothing: an operator would never hear of the
 * plant again for one bad night.
 */
export function suppressionsOf({ type, data }: MailEvent): Suppression[] {
  if (!data) return [];
  const addresses = data.to.map(bareAddress);
  const of = (failure: string | null) => addresses.map((address) => ({ address, providerId: data.email_id, failure }));
  if (type === 'email.complained') return of(null);
  if (type === 'email.suppressed') return of('The mail service holds this address back after earlier trouble.');
  if (type !== 'email.bounced' || data.bounce?.type === 'Transient') return [];
  return of(`The mail bounced: ${data.bounce?.message ?? 'the mail server of this address refused it for good.'}`);
}

/** `Name <name@domain>` or `name@domain`. */
const bareAddress = (address: string): string => (/<([^<>]+)>\s*$/.exec(address)?.[1] ?? address).trim().toLowerCase();
