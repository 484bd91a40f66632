import type { EntityManager } from '@mikro-orm/postgresql';
import { AlertRuleEntity, AlertRunEntity, PlantEntity, type AlertRule, type AlertRun } from '@/entities';
import { query } from '../db/sql';
import { withTenant } from '../db/tenant';
import { dailyMail } from '../mail/daily-mail';
import type { DayFacts } from '../mail/daily-mail-model';
import { readDaySums, type DaySums } from '../mail/day-rows';
import {
  countDeliveries,
  planDeliveries,
  recordAnswer,
  type DeliveryCounts,
  type PendingDelivery,
} from '../mail/deliveries';
import { deliveryLinks, hourLink, unsubscribeHeaders } from '../mail/links';
import { readDayFacts } from '../mail/read-day';
import { MailUnavailable, type MailSender, type SendAnswer } from '../mail/sender';
import { durationWords, plain } from '../mail/sentences';
import type { ALERT_OUTCOMES } from '../schemas/alert';

export interface EvaluateAlertInput {
  organizationId: string;
  runId: string;
}
export interface EvaluateAlertDeps {
  mail: MailSender;
  /** Where links lead, without a slash at the end. */
  publicUrl: string;
  /** The application's secret, which signs the links. */
  secret: string;
  signal?: AbortSignal;
}

type Outcome = (typeof ALERT_OUTCOMES)[number];
interface Plan {
  run: AlertRun;
  rule: AlertRule;
  facts: DayFacts;
  deliveries: PendingDelivery[];
}

const NOTHING_SENT = {
  'already-sent': 'Nothing more was sent: the mail of this day has gone out before.',
  'no-recipients': 'No mail was sent: no operator of this organization takes mail.',
} as const;

/**
 * Evaluates one (plant, local day) and mails its operators: one delivery a person, rendered and sent one by one, no transaction
 * held meanwhile. Safe to run twice, and twice at once: a delivery that was sent is never sent again, and the mail service is
 * asked under a key made of the delivery's id, so that a crash between sending and writing it down mails once.
 *
 * Throws  MailUnavailable, after trying every delivery, when asking again later may help. A refusal is written down in words.
 */
export async function evaluateAlert(input: EvaluateAlertInput, deps: EvaluateAlertDeps): Promise<void> {
  const tenancy = { organizationIds: [input.organizationId] };
  const plan = await withTenant(tenancy, (em) => planRun(em, input));
  if (!plan) return;
  let unavailable: MailUnavailable | null = null;
  for (const delivery of plan.deliveries) {
    deps.signal?.throwIfAborted();
    try {
      const { subject, answer } = await sendOne(plan, delivery, deps);
      await withTenant(tenancy, (em) => recordAnswer(em, input.organizationId, delivery.id, subject, answer));
    } catch (error) {
      if (!(error instanceof MailUnavailable)) throw error;
      unavailable = error;
    }
  }
  await withTenant(tenancy, async (em) => {
    const counts = await countDeliveries(em, plan.run);
    const outcome = unavailable ? 'pending' : counts.sent > 0 ? 'sent' : 'failed';
    await closeRun(em, input, outcome, outcomeWords(plan.facts, counts, unavailable !== null));
  });
  if (unavailable) throw unavailable;
}

/** Decides what the day calls for; null when nothing is to be sent, the run's outcome written. */
async function planRun(em: EntityManager, input: EvaluateAlertInput): Promise<Plan | null> {
  const { organizationId } = input;
  const run = await em.findOne(AlertRunEntity, { id: input.runId, organizationId });
  const plant = run && (await em.findOne(PlantEntity, { id: run.plantId, organizationId, deletedAt: null }));
  if (!run || !plant) return null;
  const close = (outcome: Outcome, detail: string) => closeRun(em, input, outcome, detail).then(() => null);
  const rule = await em.findOne(AlertRuleEntity, { plantId: plant.id, organizationId });
  if (!rule?.enabled) return close('disabled', 'The daily alert of this plant is switched off.');
  const sums = await readDaySums(em, plant, run.day);
  if (!sums || sums.coverage === 0) return close('no-data', 'Nothing is known of this day: no samples have come in.');
  const below = belowRule(rule, sums);
  if (below !== null) return close('nothing-to-report', below);
  const deliveries = await planDeliveries(em, run);
  if (typeof deliveries === 'string') return close(deliveries, NOTHING_SENT[deliveries]);
  return { run, rule, facts: await readDayFacts(em, plant, sums), deliveries };
}

/** In words, why the day stays below the rule; null when it does not. */
function belowRule(rule: AlertRule, sums: DaySums): string | null {
  const minFlowGpm = Number(rule.minReverseFlowGpm);
  if (sums.reverseMinutes < rule.minReverseMinutes) {
    const ran =
      sums.reverseMinutes < 0.5 ? 'It did not run backwards' : `It ran backwards ${durationWords(sums.reverseMinutes)}`;
    return plain(`${ran}; the rule asks for ${durationWords(rule.minReverseMinutes)} or more.`);
  }
  const mostGpm = sums.largestReverseFlowGpm;
  if (minFlowGpm === 0 || (mostGpm !== null && mostGpm >= minFlowGpm)) return null;
  const most = mostGpm === null ? 'How much came back is not known' : `At most ${Math.round(mostGpm)} gpm came back`;
  return `${most}; the rule asks for ${Math.round(minFlowGpm)} gpm or more.`;
}

async function sendOne(
  { run, rule, facts }: Plan,
  delivery: PendingDelivery,
  { mail, publicUrl, secret, signal }: EvaluateAlertDeps,
): Promise<{ subject: string; answer: SendAnswer }> {
  const links = deliveryLinks(delivery.id, publicUrl, secret);
  const worstHour = facts.worstHourMs === null ? null : hourLink(publicUrl, run.plantId, facts.worstHourMs);
  const { subject, text, html } = await dailyMail({
    ...facts,
    evaluatedAtMs: delivery.decidedAtMs,
    rule: { minReverseMinutes: rule.minReverseMinutes, minReverseFlowGpm: Number(rule.minReverseFlowGpm) },
    links: { ...links, worstHour },
  });
  const idempotencyKey = `alert-delivery/${delivery.id}`;
  const headers = unsubscribeHeaders(links);
  return {
    subject,
    answer: await mail.send({ to: delivery.email, subject, text, html, headers, idempotencyKey }, signal),
  };
}

function outcomeWords(facts: DayFacts, counts: DeliveryCounts, again: boolean): string {
  const parts = [
    `Ran backwards ${durationWords(facts.reverseMinutes)}`,
    counts.sent > 0 ? `mailed to ${people(counts.sent)}` : '',
    counts.failed > 0 ? `refused for ${people(counts.failed)}` : '',
    counts.pending > 0 ? `not yet sent to ${people(counts.pending)}` : '',
    counts.suppressed > 0 ? `${people(counts.suppressed)} ${counts.suppressed === 1 ? 'takes' : 'take'} no mail` : '',
  ].filter((part) => part !== '');
  return plain(`${parts.join('; ')}.${again ? ' The mail service did not take the mail; it is asked again.' : ''}`);
}

const people = (count: number): string => (count === 1 ? '1 operator' : `${count} operators`);

async function closeRun(em: EntityManager, input: EvaluateAlertInput, outcome: Outcome, detail: string): Promise<void> {
  await query(
    em,
    `update alert_run set outcome = $3, detail = $4, finished_at = case when $3 <> 'pending' then now() end
     where id = $1 and organization_id = $2`,
    [input.runId, input.organizationId, outcome, detail],
  );
}
