import type { CauseTotal } from '@/components/charts/cause-bars';
import { causeWords, type Cause } from '@/lib/client/words';
import type { HourRow } from '@/lib/schemas/results';

/** Hours and cost by cause over the low hours, largest cost first. */
export function causeTotals(hours: readonly HourRow[]): CauseTotal[] {
  const totals = new Map<Cause, CauseTotal>();
  const add = (sum: number | null, value: number | null): number | null => (value === null ? sum : (sum ?? 0) + value);
  for (const hour of hours) {
    if (hour.low === 0) continue;
    const before = totals.get(hour.cause) ?? { cause: hour.cause, hours: 0, cost: null, energyKwh: null };
    totals.set(hour.cause, {
      cause: hour.cause,
      hours: before.hours + 1,
      cost: add(before.cost, hour.excessCost),
      energyKwh: add(before.energyKwh, hour.excessEnergyKwh),
    });
  }
  const weight = (total: CauseTotal) => total.cost ?? total.energyKwh ?? 0;
  return [...totals.values()].sort((a, b) => weight(b) - weight(a) || b.hours - a.hours);
}

/** The list's finding: how many, what makes most of them, what makes the worst. */
export function hoursLead(hours: readonly HourRow[]): string {
  const low = hours.filter((hour) => hour.low === 1);
  if (hours.length === 0) return 'No data in this period.';
  if (low.length === 0) return 'No hour of this period was low: the delta-T held at every load that counts.';
  const named = causeTotals(low).filter((total) => total.cause !== 'none');
  const most = [...named].sort((a, b) => b.hours - a.hours)[0];
  const worst = low.reduce((a, b) => ((b.excessFlowGpm ?? 0) > (a.excessFlowGpm ?? 0) ? b : a));
  const count = `${low.length.toLocaleString('en-US')} low delta-T ${low.length === 1 ? 'hour' : 'hours'} moved more water than the load needed.`;
  if (!most) return `${count} None has a cause that counts.`;
  const first = `${capital(causeWords(most.cause))} makes most of the hours`;
  return worst.cause === 'none' || worst.cause === most.cause
    ? `${count} ${first}.`
    : `${count} ${first}; ${causeWords(worst.cause)} makes the worst one.`;
}

const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);
