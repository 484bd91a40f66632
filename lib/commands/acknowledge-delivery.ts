import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { addLocalDays, startOfLocalDay } from '../client/format-time';
import { isoInstant, query, queryOne } from '../db/sql';
import { withoutTenant, withTenant } from '../db/tenant';
import { recordAudit } from './record-audit';

/** A link in a forgotten mailbox does not stay a key for ever. */
export const LINK_DAYS = 30;
/** An acknowledgement is taken back by the link for this long; after that by someone signed in. */
export const UNDO_MINUTES = 60;
export const MAX_NOTE_CHARACTERS = 2000;

/** A mail that was sent, as its signed link may see it. */
export interface LinkedDelivery {
  deliveryId: string;
  organizationId: string;
  plantId: string;
  userId: string;
  timeZone: string;
  /** Local day the mail is about. */
  day: string;
  subject: string;
  acknowledgedAt: string | null;
  canUndo: boolean;
  /** The person takes no more mail. */
  stopped: boolean;
}

/** The delivery behind a link; null when it is gone, too old, or its person has left the organization. Changes nothing. */
export async function readDelivery(deliveryId: string): Promise<LinkedDelivery | null> {
  return inTenantOf(deliveryId, (em, organizationId) => findDelivery(em, organizationId, deliveryId));
}

/**
 * Acknowledges a delivery, and with it the episodes that touch its local day and nobody has acknowledged yet. The first time
 * counts: again is no change, but a note is added. Null when the link is no longer good.
 */
export async function acknowledgeDelivery(deliveryId: string, note = ''): Promise<LinkedDelivery | null> {
  return inTenantOf(deliveryId, async (em, organizationId) => {
    const delivery = await findDelivery(em, organizationId, deliveryId);
    if (!delivery) return null;
    const owner = [organizationId, delivery.plantId];
    const range = [
      new Date(startOfLocalDay(delivery.day, delivery.timeZone)).toISOString(),
      new Date(startOfLocalDay(addLocalDays(delivery.day, 1), delivery.timeZone)).toISOString(),
    ];
    const first = await query(
      em,
      `update alert_delivery set acknowledged_at = now() where id = $1 and organization_id = $2 and acknowledged_at is null returning id`,
      [deliveryId, organizationId],
    );
    if (first.length > 0) {
      await query(
        em,
        `update episode set acknowledged_at = now(), acknowledged_by = $5
         where organization_id = $1 and plant_id = $2 and started_at < $4 and ended_at > $3 and acknowledged_at is null`,
        [...owner, ...range, delivery.userId],
      );
    }
    const words = note.trim().slice(0, MAX_NOTE_CHARACTERS);
    if (words !== '') {
      // A form sent twice writes its note once.
      await query(
        em,
        `update episode set note = case when coalesce(note, '') = '' then $5 else note || E'\\n' || $5 end
         where organization_id = $1 and plant_id = $2 and started_at < $4 and ended_at > $3
           and right(coalesce(note, ''), length($5)) <> $5`,
        [...owner, ...range, words],
      );
    }
    if (first.length > 0 || words !== '')
      await audit(em, delivery, 'delivery.acknowledged', words === '' ? {} : { note: words });
    return findDelivery(em, organizationId, deliveryId);
  });
}

/**
 * Takes an acknowledgement back while its time lasts, and those of the episodes that it brought with it; a note stays. Null
 * when the link is no longer good.
 */
export async function undoAcknowledgement(deliveryId: string): Promise<LinkedDelivery | null> {
  return inTenantOf(deliveryId, async (em, organizationId) => {
    const delivery = await findDelivery(em, organizationId, deliveryId);
    if (!delivery?.canUndo) return delivery;
    // One transaction gave them all the same instant: that tells them from episodes acknowledged otherwise.
    await query(
      em,
      `update episode e set acknowledged_at = null, acknowledged_by = null from alert_delivery d
       where d.id = $1 and d.organization_id = $2 and e.organization_id = $2 and e.plant_id = d.plant_id
         and e.acknowledged_by = d.user_id and e.acknowledged_at = d.acknowledged_at`,
      [deliveryId, organizationId],
    );
    await query(em, `update alert_delivery set acknowledged_at = null where id = $1 and organization_id = $2`, [
      deliveryId,
      organizationId,
    ]);
    await audit(em, delivery, 'delivery.unacknowledged');
    return findDelivery(em, organizationId, deliveryId);
  });
}

/** Opens the tenant of a delivery, which the link alone names; null when there is no such delivery. */
async function inTenantOf<Result>(
  deliveryId: string,
  work: (em: EntityManager, organizationId: string) => Promise<Result | null>,
): Promise<Result | null> {
  const owner = await withoutTenant((em) =>
    queryOne<{ organization_id: string }>(em, `select organization_id from delivery_tenant($1)`, [deliveryId]),
  );
  if (!owner) return null;
  const organizationId = owner.organization_id;
  return withTenant({ organizationIds: [organizationId] }, (em) => work(em, organizationId));
}

async function findDelivery(
  em: EntityManager,
  organizationId: string,
  deliveryId: string,
): Promise<LinkedDelivery | null> {
  const row = await queryOne<{
    plant_id: string;
    user_id: string;
    time_zone: string;
    day: string;
    subject: string;
    acknowledged_at: string | null;
    can_undo: boolean;
    stopped: boolean;
  }>(
    em,
    `select d.plant_id, d.user_id, p.time_zone, d.day, d.subject, d.acknowledged_at,
       coalesce(d.acknowledged_at > now() - $3 * interval '1 minute', false) as can_undo,
       u.mail_suppressed_at is not null as stopped
     from alert_delivery d
     join plant p on p.id = d.plant_id and p.organization_id = d.organization_id and p.deleted_at is null
     join membership m on m.organization_id = d.organization_id and m.user_id = d.user_id
     join app_user u on u.id = d.user_id
     where d.id = $1 and d.organization_id = $2 and d.created_at > now() - $4 * interval '1 day'`,
    [deliveryId, organizationId, UNDO_MINUTES, LINK_DAYS],
  );
  if (!row) return null;
  return {
    deliveryId,
    organizationId,
    plantId: row.plant_id,
    userId: row.user_id,
    timeZone: row.time_zone,
    day: row.day,
    subject: row.subject,
    acknowledgedAt: isoInstant(row.acknowledged_at),
    canUndo: row.can_undo,
    stopped: row.stopped,
  };
}

/** The link stands for the person it was mailed to, in this organization only. */
async function audit(
  em: EntityManager,
  { organizationId, userId, deliveryId }: LinkedDelivery,
  action: string,
  detail: Record<string, unknown> = {},
): Promise<void> {
  const access: Access = {
    kind: 'session',
    userId,
    tokenId: null,
    scope: 'session',
    ingestPlantId: null,
    onlyPlantId: null,
    memberships: [],
    organizationIds: [organizationId],
  };
  await recordAudit(em, access, {
    organizationId,
    action,
    subjectKind: 'alert-delivery',
    subjectId: deliveryId,
    detail,
  });
}
