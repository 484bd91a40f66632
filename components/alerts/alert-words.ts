import type { Alerts } from '@/lib/schemas/alert';

/** The page's finding: whether and when a mail goes out, and to how many. */
export function alertsLead({ rule, recipients }: Alerts): string {
  if (!rule.enabled) return 'The daily mail is switched off for this plant.';
  const to = recipients.length === 1 ? 'one operator' : `${recipients.length} operators`;
  if (recipients.length === 0)
    return 'The daily mail is on, and nobody gets it: this organization has no operator yet.';
  return `At ${rule.sendAt} a mail goes to ${to} when return water ran backwards for ${rule.minReverseMinutes} minutes or more the day before.`;
}

/** What a day's evaluation came to, in a word or two. */
export const OUTCOME_WORDS: Readonly<Record<Alerts['runs'][number]['outcome'], string>> = {
  pending: 'under way',
  sent: 'sent',
  'nothing-to-report': 'nothing to report',
  'no-data': 'no data',
  'no-recipients': 'no recipients',
  'already-sent': 'sent before',
  disabled: 'switched off',
  failed: 'failed',
};
