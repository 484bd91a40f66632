import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { query } from '../db/sql';
import type { AlertRule } from '../schemas/alert';
import { recordAudit } from './record-audit';

/** Sets the plant's alert rule. */
export async function putAlertRule(
  em: EntityManager,
  access: Access,
  plant: { id: string; organizationId: string },
  rule: AlertRule,
): Promise<void> {
  await query(
    em,
    `insert into alert_rule (organization_id, plant_id, enabled, min_reverse_minutes, min_reverse_flow_gpm, send_at, updated_by, updated_at)
     values ($1, $2, $3, $4, $5, $6, $7, now())
     on conflict (plant_id) do update set enabled = excluded.enabled, min_reverse_minutes = excluded.min_reverse_minutes,
       min_reverse_flow_gpm = excluded.min_reverse_flow_gpm, send_at = excluded.send_at,
       updated_by = excluded.updated_by, updated_at = excluded.updated_at`,
    [
      plant.organizationId,
      plant.id,
      rule.enabled,
      rule.minReverseMinutes,
      rule.minReverseFlowGpm,
      rule.sendAt,
      access.userId,
    ],
  );
  await recordAudit(em, access, {
    organizationId: plant.organizationId,
    action: 'alert-rule.updated',
    subjectKind: 'plant',
    subjectId: plant.id,
    detail: { ...rule },
  });
}
