import { createHmac } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { suppressionsOf, verifiedEvent } from '@/lib/mail/webhook-event';

const KEY = Buffer.from('the tests sign with this key');
const SECRET = `whsec_${KEY.toString('base64')}`;

/** Signs as the service does: HMAC-SHA-256 over id, timestamp and body, in base64. */
function signed(body: string, { key = KEY, atSeconds = Math.floor(Date.now() / 1000) } = {}): Headers {
  const signature = createHmac('sha256', key).update(`msg_1.${atSeconds}.${body}`).digest('base64');
  return new Headers({ 'svix-id': 'msg_1', 'svix-timestamp': String(atSeconds), 'svix-signature': `v1,${signature}` });
}
const event = (type: string, bounce?: object) =>
  JSON.stringify({
    type,
    created_at: '2026-07-25T10:31:00Z',
    data: { email_id: 'mail-1', to: ['Kit Moor <Operator@Tern-Quay.example>'], ...(bounce ? { bounce } : {}) },
  });
const bounced = event('email.bounced', { type: 'Permanent', subType: 'General', message: 'no such mailbox' });

describe('verifiedEvent', () => {
  it('takes a call with the service’s own signature', () => {
    expect(verifiedEvent(bounced, signed(bounced), SECRET)?.type).toBe('email.bounced');
  });
  it('refuses a body that was changed after signing', () => {
    expect(verifiedEvent(bounced.replace('mail-1', 'mail-2'), signed(bounced), SECRET)).toBeNull();
  });
  it('refuses a signature under another key', () => {
    expect(verifiedEvent(bounced, signed(bounced, { key: Buffer.from('another key') }), SECRET)).toBeNull();
  });
  it('refuses a call that is older than five minutes, so that none is played again', () => {
    const atSeconds = Math.floor(Date.now() / 1000) - 301;
    expect(verifiedEvent(bounced, signed(bounced, { atSeconds }), SECRET)).toBeNull();
  });
  it('refuses a call without a signature', () => {
    expect(verifiedEvent(bounced, new Headers(), SECRET)).toBeNull();
  });
  it('refuses what is signed but no event', () => {
    expect(verifiedEvent('[]', signed('[]'), SECRET)).toBeNull();
  });
});

describe('suppressionsOf', () => {
  const of = (body: string) => {
    const found = verifiedEvent(body, signed(body), SECRET);
    return found ? suppressionsOf(found) : null;
  };
  it('stops mail to the bare, lower-case address of a bounce and says why the mail failed', () => {
    expect(of(bounced)).toEqual([
      { address: 'operator@tern-quay.example', providerId: 'mail-1', failure: 'The mail bounced: no such mailbox' },
    ]);
  });
  it('stops mail after a complaint, whose mail did arrive', () => {
    expect(of(event('email.complained'))).toEqual([
      { address: 'operator@tern-quay.example', providerId: 'mail-1', failure: null },
    ]);
  });
  it('stops nothing for a bounce that passes, such as a full mailbox', () => {
    expect(of(event('email.bounced', { type: 'Transient', subType: 'MailboxFull', message: 'full' }))).toEqual([]);
  });
  it.each(['email.delivered', 'email.opened', 'contact.created'])('stops nothing for %s', (type) => {
    expect(of(event(type))).toEqual([]);
  });
});
