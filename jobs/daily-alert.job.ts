import { evaluateAlert } from '@/lib/commands/evaluate-alert';
import { query } from '@/lib/db/sql';
import type { Env } from '@/lib/env';
import { resendSender } from '@/lib/mail/resend-sender';
import { defineJob, type JobDefinition } from './define-job';

type MailEnv = Pick<Env<'worker'>, 'RESEND_API_KEY' | 'RESEND_BASE_URL' | 'MAIL_FROM' | 'LINK_ORIGIN' | 'APP_SECRET'>;

/** Evaluates one claimed (plant, local day). Safe twice: a delivery that was sent is never sent again. */
export function dailyAlert(env: MailEnv): JobDefinition<'daily-alert'> {
  const mail = resendSender({ apiKey: env.RESEND_API_KEY, baseUrl: env.RESEND_BASE_URL, from: env.MAIL_FROM });
  return defineJob({
    name: 'daily-alert',
    run: ({ signal }, payload) =>
      evaluateAlert(payload, { mail, publicUrl: env.LINK_ORIGIN, secret: env.APP_SECRET, signal }),
    async giveUp(em, { organizationId, runId }, message) {
      await query(
        em,
        `update alert_run set outcome = 'failed', detail = $3, finished_at = now() where id = $1 and organization_id = $2 and outcome = 'pending'`,
        [runId, organizationId, message],
      );
    },
  });
}
