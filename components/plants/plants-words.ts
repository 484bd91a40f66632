import type { OverviewPlant } from '@/lib/schemas/overview';

const NUMBERS = [
  'no',
  'one',
  'two',
  'three',
  'four',
  'five',
  'six',
  'seven',
  'eight',
  'nine',
  'ten',
  'eleven',
  'twelve',
];
/** Small numbers in words, as running text has them. */
export const inWords = (count: number): string => NUMBERS[count] ?? count.toLocaleString('en-US');
const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);
const plural = (count: number, one: string, many = `${one}s`): string =>
  `${inWords(count)} ${count === 1 ? one : many}`;

/** The list's finding in one sentence. */
export function plantsLead(plants: readonly OverviewPlant[]): string {
  if (plants.length === 0) return 'No plant is set up yet.';
  const owners = new Set(plants.map((plant) => plant.organizationId)).size;
  const reversed = plants.filter((plant) => (plant.yesterday?.reverseMinutes ?? 0) >= 30).length;
  const silent = plants.filter((plant) => plant.ground === 'silence' || plant.ground === 'no-data').length;
  const who =
    owners === 1
      ? `${capital(plural(plants.length, 'plant'))}.`
      : `${capital(plural(plants.length, 'plant'))} of ${plural(owners, 'owner')}.`;
  const ran = reversed === 0 ? 'None ran backwards yesterday' : `${capital(inWords(reversed))} ran backwards yesterday`;
  const quiet = silent === 0 ? '' : `; ${inWords(silent)} ${silent === 1 ? 'has' : 'have'} sent nothing lately`;
  return `${who} ${ran}${quiet}.`;
}

export const ORDERS = ['look', 'reverse', 'cost', 'low', 'name'] as const;
export type Order = (typeof ORDERS)[number];
export const ORDER_LABELS: Readonly<Record<Order, string>> = {
  look: 'look at first',
  reverse: 'reverse',
  cost: 'cost',
  low: 'low hours',
  name: 'name',
};

/** The plants in another order; "look at first" is the server's own. */
export function inOrder(plants: readonly OverviewPlant[], order: Order): OverviewPlant[] {
  const by = (value: (plant: OverviewPlant) => number) =>
    [...plants].sort((a, b) => value(b) - value(a) || a.rank - b.rank);
  switch (order) {
    case 'look':
      return [...plants].sort((a, b) => a.rank - b.rank);
    case 'reverse':
      return by((plant) => plant.week.reverseMinutes);
    case 'cost':
      return by((plant) => plant.week.excessCost ?? -1);
    case 'low':
      return by((plant) => plant.week.lowHours);
    case 'name':
      return [...plants].sort((a, b) => a.name.localeCompare(b.name));
  }
}
