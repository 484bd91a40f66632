import { computeSlice } from '@/lib/commands/compute-slice';
import { readSlice } from '@/lib/commands/read-slice';
import { writeSlice } from '@/lib/commands/write-slice';
import { settleAnalyses } from '@/lib/commands/finish-analysis';
import { enqueue } from '@/lib/db/enqueue';
import { query } from '@/lib/db/sql';
import { withTenant } from '@/lib/db/tenant';
import { defineJob } from './define-job';

/**
 * One slice of a plant's stale days; the last transaction writes it, sends the next slice and completes this job. Safe twice at
 * once: a slice is written only while the marks it read are still the latest.
 */
export const analysePlant = defineJob({
  name: 'analyse-plant',
  async run(context, owner) {
    const input = await readSlice(owner);
    context.signal.throwIfAborted();
    const result = input && computeSlice(input);
    await new Promise((resolve) => setImmediate(resolve)); // lets the heartbeat through
    context.signal.throwIfAborted();
    await withTenant({ organizationIds: [owner.organizationId] }, async (em) => {
      await context.fence(em);
      if (input && result) await writeSlice(em, input, result);
      if ((await settleAnalyses(em, owner)) === 'going-on') await enqueue(em, 'analyse-plant', owner);
      await context.complete(em);
    });
  },
  async giveUp(em, { organizationId, plantId }, message) {
    await query(
      em,
      `with ended as (
         update analysis set status = 'failed', failure = $3, finished_at = now()
         where organization_id = $1 and plant_id = $2 and status in ('queued', 'running') returning upload_id)
       update upload u set status = 'failed', finished_at = now(), problems = $4::jsonb || problems
       from ended e where u.id = e.upload_id and u.status = 'analysing'`,
      [
        organizationId,
        plantId,
        message,
        JSON.stringify([
          {
            code: 'analysis-failed',
            severity: 'error',
            message: `The file was read, but its analysis failed. ${message}`,
            count: 1,
          },
        ]),
      ],
    );
  },
});
