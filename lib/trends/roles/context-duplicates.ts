import { pointRole, type PointRoleName } from '../../point-roles';
import { doubt, JUST_OPEN, type Draft } from './draft';
import { alignedTo, factorOf, FEWEST_ROWS, medianOf, stored } from './pairing';

/** Roles that a plant has several of as a rule: all of them are used. */
const PLURAL: readonly PointRoleName[] = [
  'distributionPumpPower',
  'distributionPumpSpeed',
  'distributionPumpStatus',
  'differentialPressure',
];
/** Sensors of one thing that differ by more than this do not belong together. */
const APART_F = 3;
const AGREE_F = 1.5;
/** A column within this share of the sum of the others is their total. */
const TOTAL_SHARE = 0.04;

/** A second claim of a role that one column fills is left to a person, with the reason. */
export function weighDuplicates(drafts: readonly Draft[]): void {
  const groups = new Map<string, Draft[]>();
  for (const draft of drafts) {
    if (draft.role === 'ignore' || draft.statistics.count === 0) continue;
    const key = `${draft.role} ${draft.unitIndex ?? ''}`;
    groups.set(key, [...(groups.get(key) ?? []), draft]);
  }
  for (const group of groups.values()) if (group.length > 1) weighGroup(group);
}

function weighGroup(group: readonly Draft[]): void {
  const role = group[0]!.role as PointRoleName;
  const { quantity } = pointRole(role);
  const ranked = [...group].sort((a, b) => b.confidence - a.confidence);
  const [first, ...rest] = ranked;
  if (quantity === 'flow' || role === 'distributionPumpPower') {
    const total = findTotal(group);
    if (total) return doubt(total, JUST_OPEN, 'The sum of the others of its role: with them it would count twice');
  }
  if (PLURAL.includes(role)) return;
  for (const draft of rest) {
    const same = isSame(first!, draft);
    if (quantity === 'flow') {
      if (same) doubt(draft, JUST_OPEN, `Reads as "${first!.column}" does: with it the flow would count twice`);
      else if (!areSiblings(first!, draft)) doubt(draft, JUST_OPEN, secondClaim(first!));
      continue;
    }
    const together =
      quantity === 'temperature' && (areSiblings(first!, draft) ? !areApart(first!, draft) : isOutdoor(role) && same);
    if (!together && !(quantity !== 'temperature' && areSiblings(first!, draft)))
      doubt(draft, JUST_OPEN, secondClaim(first!));
  }
}

const secondClaim = (first: Draft): string => `"${first.column}" claims the same place; choose one of them`;
const isOutdoor = (role: PointRoleName) => role === 'outdoorTemp' || role === 'outdoorWetBulb';

/** Names that differ only in a number or letter: sensor 1 and 2 of one thing. */
function areSiblings(a: Draft, b: Draft): boolean {
  // A "(2)" is put behind the second of two equal headings; such columns have one name.
  const plain = ({ column }: Draft) => column.replace(/ \(\d+\)$/, '');
  if (plain(a) === plain(b)) return false;
  const bare = (draft: Draft) =>
    plain(draft)
      .replace(/\d+|(?<![a-z])[a-h](?![a-z])/gi, '#')
      .toLowerCase();
  return bare(a) === bare(b);
}

function differences(a: Draft, b: Draft): Float64Array | null {
  const other = alignedTo(a, b);
  if (!other) return null;
  const gaps = a.statistics.values.map((value, i) => Math.abs(stored(a, value) - stored(b, other[i]!)));
  return gaps.some((gap) => !Number.isNaN(gap)) ? gaps : null;
}

function areApart(a: Draft, b: Draft): boolean {
  const gaps = differences(a, b);
  return gaps !== null && medianOf(gaps) > APART_F;
}

function isSame(a: Draft, b: Draft): boolean {
  const gaps = differences(a, b);
  if (!gaps) return false;
  if (a.quantity === 'temperature') return medianOf(gaps) < AGREE_F;
  const size = Math.abs(a.statistics.p95 * factorOf(a));
  return size > 0 && medianOf(gaps) < size * TOTAL_SHARE;
}

/** The column of three or more that is the sum of the others. */
function findTotal(group: readonly Draft[]): Draft | undefined {
  if (group.length < 3) return undefined;
  const largest = group.reduce((a, b) => (factorOf(b) * b.statistics.p95 > factorOf(a) * a.statistics.p95 ? b : a));
  const sum = new Float64Array(largest.statistics.values.length);
  for (const draft of group) {
    if (draft === largest) continue;
    const values = alignedTo(largest, draft);
    if (!values) return undefined;
    for (let i = 0; i < sum.length; i++) sum[i] = sum[i]! + values[i]! * factorOf(draft);
  }
  const gaps = largest.statistics.values
    .map((value, i) => Math.abs(value * factorOf(largest) - sum[i]!))
    .filter((gap) => !Number.isNaN(gap));
  const size = Math.abs(largest.statistics.p95 * factorOf(largest));
  return gaps.length >= FEWEST_ROWS && size > 0 && medianOf(gaps) < size * TOTAL_SHARE ? largest : undefined;
}
