import type { EntityManager } from '@mikro-orm/postgresql';
import type { z } from 'zod';
import { isoInstant, query, queryOne } from '../db/sql';
import { AlertRule, type AlertDelivery, type AlertRun, type Alerts } from '../schemas/alert';

/** Runs and deliveries shown: about two months of a plant with a few operators. */
const RUNS_SHOWN = 60;
const DELIVERIES_SHOWN = 300;

interface Owner {
  organizationId: string;
  plantId: string;
}

/** The daily alert of a plant: its rule, what its last days came to, the mails, and who would get the next one. */
export async function readAlerts(em: EntityManager, owner: Owner): Promise<Alerts> {
  return {
    rule: await readAlertRule(em, owner),
    runs: await readRuns(em, owner),
    deliveries: await readDeliveries(em, owner),
    recipients: await readRecipients(em, owner.organizationId),
  };
}

export async function readAlertRule(em: EntityManager, { organizationId, plantId }: Owner): Promise<AlertRule> {
  const row = await queryOne<{
    enabled: boolean;
    min_reverse_minutes: number;
    min_reverse_flow_gpm: number;
    send_at: string;
  }>(
    em,
    `select enabled, min_reverse_minutes, min_reverse_flow_gpm, to_char(send_at, 'HH24:MI') as send_at
     from alert_rule where plant_id = $1 and organization_id = $2`,
    [plantId, organizationId],
  );
  // Without a row nothing is sent, whatever the defaults say.
  if (!row) return { ...AlertRule.parse({}), enabled: false };
  return {
    enabled: row.enabled,
    minReverseMinutes: row.min_reverse_minutes,
    minReverseFlowGpm: row.min_reverse_flow_gpm,
    sendAt: row.send_at,
  };
}

async function readRuns(em: EntityManager, owner: Owner): Promise<z.infer<typeof AlertRun>[]> {
  const rows = await query<z.infer<typeof AlertRun> & { created_at: string }>(
    em,
    `select id, day, outcome, detail, created_at from alert_run
     where plant_id = $1 and organization_id = $2 order by day desc limit $3`,
    [owner.plantId, owner.organizationId, RUNS_SHOWN],
  );
  return rows.map(({ created_at, ...run }) => ({ ...run, createdAt: isoInstant(created_at) }));
}

async function readDeliveries(em: EntityManager, owner: Owner): Promise<z.infer<typeof AlertDelivery>[]> {
  const rows = await query<{
    id: string;
    day: string;
    email: string;
    status: z.infer<typeof AlertDelivery>['status'];
    subject: string;
    sent_at: string | null;
    failure: string | null;
    acknowledged_at: string | null;
    name: string | null;
  }>(
    em,
    `select d.id, d.day, d.email, d.status, d.subject, d.sent_at, d.failure, d.acknowledged_at, u.name
     from alert_delivery d left join app_user u on u.id = d.user_id
     where d.plant_id = $1 and d.organization_id = $2 order by d.day desc, d.email limit $3`,
    [owner.plantId, owner.organizationId, DELIVERIES_SHOWN],
  );
  return rows.map((row) => ({
    id: row.id,
    day: row.day,
    email: row.email,
    status: row.status,
    subject: row.subject,
    sentAt: isoInstant(row.sent_at),
    failure: row.failure,
    acknowledgedAt: isoInstant(row.acknowledged_at),
    // A mail is acknowledged by the person it went to; someone who has left the organization is known by their address.
    acknowledgedBy: row.acknowledged_at === null ? null : (row.name ?? row.email),
  }));
}

/** The operators who take mail. */
const readRecipients = (em: EntityManager, organizationId: string): Promise<Alerts['recipients']> =>
  query(
    em,
    `select u.name, u.email from membership m join app_user u on u.id = m.user_id
     where m.organization_id = $1 and m.role = 'operator' and u.mail_suppressed_at is null order by u.email`,
    [organizationId],
  );
