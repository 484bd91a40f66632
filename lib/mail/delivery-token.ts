import { createHmac, timingSafeEqual } from 'node:crypto';

/** Half of the digest's 32 bytes: the least that RFC 2104, section 5, advises; keeps the link on one line of a text mail. */
const TAG_BYTES = 16;
/** Keeps this use of the secret apart from every other. */
const PURPOSE = 'alert-delivery-link';

/**
 * The token of a delivery's links: the delivery's id and its HMAC-SHA-256 under the application's secret. Whoever holds it got
 * the mail, or was handed it; it opens this one delivery and nothing else.
 */
export function deliveryToken(deliveryId: string, secret: string): string {
  const id = Buffer.from(deliveryId.replaceAll('-', ''), 'hex');
  if (id.length !== 16) throw new RangeError(`deliveryToken: not a delivery id (${deliveryId.length} characters)`);
  return `${id.toString('base64url')}${tag(id, secret).toString('base64url')}`;
}

/** The delivery a token was made for; null when it was not made with this secret, or was changed. */
export function readDeliveryToken(token: string, secret: string): string | null {
  if (!/^[\w-]{44}$/.test(token)) return null;
  const id = Buffer.from(token.slice(0, 22), 'base64url');
  const given = Buffer.from(token.slice(22), 'base64url');
  // A base64url text has spare bits: only the one spelling that deliveryToken makes is taken.
  const exact = id.toString('base64url') + given.toString('base64url') === token;
  if (!exact || !timingSafeEqual(given, tag(id, secret))) return null;
  const hex = id.toString('hex');
  return [hex.slice(0, 8), hex.slice(8, 12), hex.slice(12, 16), hex.slice(16, 20), hex.slice(20)].join('-');
}

const tag = (id: Buffer, secret: string): Buffer =>
  createHmac('sha256', secret).update(PURPOSE).update('\0').update(id).digest().subarray(0, TAG_BYTES);
