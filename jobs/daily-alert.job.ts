import { evaluateAlert } from '@/lib/commands/evaluate-alert';
import { enqueue } from '@/lib/db/enqueue';
import { query } from '@/lib/db/sql';
import { withTenant } from '@/lib/db/tenant';
import type { Env } from '@/lib/env';
import { isDayUnderWay } from '@/lib/queries/day-under-way';
import { resendSender } from '@/lib/mail/resend-sender';
import { defineJob, type JobDefinition } from './define-job';

/** How long an evaluation waits for a record that is still being read or worked out. */
const LOOK_AGAIN_SECONDS = 60;

type MailEnv = Pick<Env<'worker'>, 'RESEND_API_KEY' | 'RESEND_BASE_URL' | 'MAIL_FROM' | 'LINK_ORIGIN' | 'APP_SECRET'>;

/** Evaluates one claimed (plant, local day). Safe twice: a delivery that was sent is never sent again. */
export function dailyAlert(env: MailEnv): JobDefinition<'daily-alert'> {
  const mail = resendSender({ apiKey: env.RESEND_API_KEY, baseUrl: env.RESEND_BASE_URL, from: env.MAIL_FROM });
  return defineJob({
    name: 'daily-alert',
    async run(context, payload) {
      const waits = await withTenant({ organizationIds: [payload.organizationId] }, async (em) => {
        if (!(await isDayUnderWay(em, payload))) return false;
        // Half a day's answer would stand for the whole day: look again when the record has come to rest.
        await enqueue(em, 'daily-alert', payload, LOOK_AGAIN_SECONDS);
        await context.complete(em);
        return true;
      });
      if (!waits)
        await evaluateAlert(payload, {
          mail,
          publicUrl: env.LINK_ORIGIN,
          secret: env.APP_SECRET,
          signal: context.signal,
        });
    },
    async giveUp(em, { organizationId, runId }, message) {
      await query(
        em,
        `update alert_run set outcome = 'failed', detail = $3, finished_at = now() where id = $1 and organization_id = $2 and outcome = 'pending'`,
        [runId, organizationId, message],
      );
    },
  });
}
