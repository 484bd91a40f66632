import type { EntityManager } from '@mikro-orm/postgresql';
import { isoInstant, query, queryOne } from '../db/sql';
import type { SendAnswer } from './sender';

/** One day of one plant, whose mails go out together. */
export interface MailDay {
  organizationId: string;
  plantId: string;
  day: string;
}

export interface PendingDelivery {
  id: string;
  email: string;
  /** When it was decided to send it: the same through every try. */
  decidedAtMs: number;
}

/**
 * One row an operator, made before anything is sent; answers with those to send to. Who waits or was refused is tried again; a
 * day whose mail is out gets no new people.
 */
export async function planDeliveries(
  em: EntityManager,
  { organizationId, plantId, day }: MailDay,
): Promise<PendingDelivery[] | 'already-sent' | 'no-recipients'> {
  const key = [organizationId, plantId, day];
  const found = await queryOne<{ mailed: boolean }>(
    em,
    `select exists (select from alert_delivery
       where organization_id = $1 and plant_id = $2 and day = $3 and status = 'sent') as mailed`,
    key,
  );
  const mailed = found?.mailed === true;
  await query(
    em,
    `insert into alert_delivery as d (organization_id, plant_id, day, user_id, email, status)
     select $1, $2, $3, u.id, u.email, case when u.mail_suppressed_at is null then 'pending' else 'suppressed' end
     from membership m join app_user u on u.id = m.user_id
     where m.organization_id = $1 and m.role = 'operator'
       and (not $4 or exists (select from alert_delivery x where x.plant_id = $2 and x.day = $3 and x.user_id = u.id))
     order by u.id
     on conflict (plant_id, day, user_id) do update
       set email = excluded.email, status = excluded.status,
         failure = null, created_at = case when d.status = 'pending' then d.created_at else now() end
       where d.status <> 'sent'`,
    [...key, mailed],
  );
  const pending = await query<{ id: string; email: string; created_at: string }>(
    em,
    `select d.id, d.email, d.created_at from alert_delivery d
     join membership m on m.organization_id = d.organization_id and m.user_id = d.user_id and m.role = 'operator'
     where d.organization_id = $1 and d.plant_id = $2 and d.day = $3 and d.status = 'pending' order by d.email`,
    key,
  );
  if (pending.length === 0) return mailed ? 'already-sent' : 'no-recipients';
  return pending.map((row) => ({
    id: row.id,
    email: row.email,
    decidedAtMs: Date.parse(isoInstant(row.created_at)),
  }));
}

/** Writes down what the mail service said of one delivery. A delivery once sent stays sent. */
export async function recordAnswer(
  em: EntityManager,
  organizationId: string,
  deliveryId: string,
  subject: string,
  answer: SendAnswer,
): Promise<void> {
  const sent = answer.kind === 'sent';
  await query(
    em,
    `update alert_delivery set status = $3, subject = $4, provider_id = $5, failure = $6,
       sent_at = case when $3 = 'sent' then now() end
     where id = $1 and organization_id = $2 and status <> 'sent'`,
    [
      deliveryId,
      organizationId,
      sent ? 'sent' : 'failed',
      subject,
      sent ? answer.providerId : null,
      sent ? null : answer.words,
    ],
  );
}

export type DeliveryCounts = Record<'sent' | 'failed' | 'pending' | 'suppressed', number>;

/** How many deliveries of a day stand where, whichever of several tries brought them there. */
export async function countDeliveries(
  em: EntityManager,
  { organizationId, plantId, day }: MailDay,
): Promise<DeliveryCounts> {
  const rows = await query<{ status: keyof DeliveryCounts; count: number }>(
    em,
    `select status, count(*)::int as count from alert_delivery
     where organization_id = $1 and plant_id = $2 and day = $3 group by status`,
    [organizationId, plantId, day],
  );
  const counts: DeliveryCounts = { sent: 0, failed: 0, pending: 0, suppressed: 0 };
  for (const row of rows) counts[row.status] = row.count;
  return counts;
}
