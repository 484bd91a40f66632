import { POINT_ROLES, pointRole, type PointRoleName } from '../../point-roles';
import { TREND_UNITS } from '../../units';
import { settleUnits } from './balance-units';
import { weighDuplicates } from './context-duplicates';
import { weighFlows } from './context-flows';
import { findIdleHeaders, weighUnits } from './context-units';
import { bearOut, doubt, JUST_OPEN, PERSON_DECIDES, says, type Draft } from './draft';
import { alignedTo, medianOf } from './pairing';
import { number } from './quantity';
import { stepSize } from './statistics';
import type { PreviewOptions } from '../types';

const WATER_ROLES: readonly PointRoleName[] = [
  'primarySupplyTemp',
  'primaryReturnTemp',
  'secondarySupplyTemp',
  'secondaryReturnTemp',
];
const COUNT_WORDS = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight'];
/** Sensors this near to each other read the same water. */
const SAME_WATER_F = 0.8;
/** Spread (5th to 95th percentile) of a supply that is held at its set-point. */
const STEADY_F = 1.5;
/** A supply this much above a return is named wrongly. */
const CROSSED_F = 1;
/** A step this near to the design flow of one unit is a unit's. */
const STEP_SHARE = 0.25;
/** A header whose name gives no side has at most this confidence. */
const OPEN_SIDE = 0.6;

const asF = (draft: Draft, value: number): number => TREND_UNITS[draft.unit ?? 'degF'].toStored(value);
const medianF = (draft: Draft): number => asF(draft, draft.statistics.median);
const percent = (share: number): string => `${Math.round(share * 100)} %`;

/** Compares columns with each other: the coldest and the warmest water, who follows whom, who clashes. */
export function weighTogether(drafts: readonly Draft[], options: PreviewOptions): void {
  const withRole = (role: PointRoleName) => drafts.filter((draft) => draft.role === role);
  settleUnits(drafts);
  findIdleHeaders(drafts);
  settleTwoHeaders(drafts);
  settleOpenSides(drafts, withRole);
  const water = drafts.filter(
    (draft) => WATER_ROLES.includes(draft.role as PointRoleName) && draft.statistics.count > 0,
  );
  rankWater(water);
  followSupply(withRole('secondarySupplyTemp')[0], withRole('primarySupplyTemp')[0]);
  followReturn(withRole('primaryReturnTemp')[0], withRole('secondaryReturnTemp')[0]);
  findCrossed(water);
  for (const draft of drafts) flowSteps(draft, options);
  weighUnits(drafts, options);
  weighFlows(drafts);
  weighDuplicates(drafts);
  noteShared(drafts);
}

/** A header of unknown side gets the side that the other columns leave. */
function settleOpenSides(drafts: readonly Draft[], withRole: (role: PointRoleName) => Draft[]): void {
  const take = (draft: Draft, role: PointRoleName, other: Draft) => {
    draft.role = role;
    draft.confidence = OPEN_SIDE;
    draft.shown.push(`taken for the ${POINT_ROLES[role].label}, because "${other.column}" is the other side`);
  };
  for (const draft of drafts) {
    if (draft.confidence > OPEN_SIDE || says(draft, 'primary', 'secondary') || draft.quantity !== 'temperature')
      continue;
    const supply = draft.role === 'headerSupplyTemp';
    if (!supply && draft.role !== 'secondaryReturnTemp') continue;
    const [primary, secondary] = supply
      ? (['primarySupplyTemp', 'secondarySupplyTemp'] as const)
      : (['primaryReturnTemp', 'secondaryReturnTemp'] as const);
    const onPrimary = withRole(primary)[0];
    const onSecondary = withRole(secondary).find((each) => each !== draft);
    if (onPrimary && !onSecondary) take(draft, secondary, onPrimary);
    else if (onSecondary && !onPrimary) take(draft, primary, onSecondary);
  }
}

/**
 * Two supplies that name no side: return water that crosses the decoupler warms the secondary supply and never the
 * primary, so the one that is warmer at times and never colder is the secondary. A share of the rows has to show it.
 */
function settleTwoHeaders(drafts: readonly Draft[]): void {
  const open = drafts.filter(({ role, confidence }) => role === 'headerSupplyTemp' && confidence >= PERSON_DECIDES);
  const named = drafts.some(({ role }) => role === 'primarySupplyTemp' || role === 'secondarySupplyTemp');
  if (open.length !== 2 || named) return;
  const gaps = differencesF(open[0]!, open[1]!);
  if (gaps.length < FEWEST_FOR_SIDES) return;
  const middle = medianOf(gaps);
  // A constant offset of two sensors is none of the water.
  const above = shareAbove(gaps, middle + BLEND_F);
  const below = shareAbove(
    gaps.map((gap) => -gap),
    BLEND_F - middle,
  );
  const share = Math.max(above, below);
  if (share < 0.05 || Math.min(above, below) > share / 5) {
    for (const draft of open)
      doubt(draft, JUST_OPEN, 'two supplies of unknown side, and their values do not tell them apart');
    return;
  }
  const [secondary, primary] = above > below ? [open[0]!, open[1]!] : [open[1]!, open[0]!];
  primary.role = 'primarySupplyTemp';
  secondary.role = 'secondarySupplyTemp';
  primary.confidence = OPEN_SIDE;
  secondary.confidence = OPEN_SIDE;
  primary.shown.push(`steadier and colder than "${secondary.column}": the primary side`);
  secondary.shown.push(`warmer than "${primary.column}" in ${percent(share)} of rows: the secondary side`);
}

/** Return water in the supply warms it by more than this. */
const BLEND_F = 0.7;
const FEWEST_FOR_SIDES = 48;

function rankWater(water: readonly Draft[]): void {
  if (water.length < 2) return;
  const sorted = [...water].sort((a, b) => medianF(a) - medianF(b));
  const coldest = sorted[0]!;
  const warmest = sorted.at(-1)!;
  const all = COUNT_WORDS[water.length] ?? String(water.length);
  if (coldest.role === 'primarySupplyTemp') {
    const spreadF = asF(coldest, coldest.statistics.p95) - asF(coldest, coldest.statistics.p05);
    const steady = spreadF < STEADY_F ? `; steady at ${number(coldest.statistics.median)}` : '';
    bearOut(coldest, `Coldest of ${all} water temperatures${steady}`);
  }
  if (warmest.role === 'secondaryReturnTemp') bearOut(warmest, `Warmest of ${all} water temperatures`);
}

/** Row by row, the difference of two columns in F; rows where one is missing are left out. */
function differencesF(a: Draft, b: Draft): number[] {
  const differences: number[] = [];
  const { values } = a.statistics;
  const other = alignedTo(a, b);
  if (!other) return differences;
  for (let i = 0; i < values.length; i++) {
    const difference = asF(a, values[i]!) - asF(b, other[i] ?? Number.NaN);
    if (!Number.isNaN(difference)) differences.push(difference);
  }
  return differences;
}

const shareAbove = (differences: readonly number[], limit: number): number =>
  differences.filter((difference) => difference > limit).length / differences.length;

function followSupply(secondary: Draft | undefined, primary: Draft | undefined): void {
  if (!secondary || !primary) return;
  const differences = differencesF(secondary, primary);
  if (differences.length === 0) return;
  const above = shareAbove(differences, SAME_WATER_F);
  const below = shareAbove(
    differences.map((each) => -each),
    SAME_WATER_F,
  );
  if (below > 0.5) return doubt(secondary, 0.6, `Colder than the primary supply in ${percent(below)} of rows`);
  const along = 'Tracks the primary supply';
  bearOut(secondary, above > 0.01 ? `${along}, above it in ${percent(above)} of rows` : along);
}

function followReturn(primary: Draft | undefined, secondary: Draft | undefined): void {
  if (!secondary || !primary) return;
  const differences = differencesF(secondary, primary);
  if (differences.length === 0) return;
  const below = shareAbove(differences, SAME_WATER_F);
  bearOut(
    primary,
    below > 0.01 ? `Below the secondary return in ${percent(below)} of rows` : 'Tracks the secondary return',
  );
}

const MUCH_SURER = 0.2;

function findCrossed(water: readonly Draft[]): void {
  const supplies = water.filter(({ role }) => role.endsWith('SupplyTemp'));
  const returns = water.filter(({ role }) => role.endsWith('ReturnTemp'));
  for (const supply of supplies) {
    const colder = returns.find((each) => medianF(each) < medianF(supply) - CROSSED_F);
    if (!colder) continue;
    const [said, against] = [supply.confidence, colder.confidence];
    // A name that leaves the side open is more likely wrong than one that says all.
    if (said < against + MUCH_SURER)
      doubt(supply, JUST_OPEN, `Named a supply but warmer than "${colder.column}", a return`);
    if (against < said + MUCH_SURER)
      doubt(colder, JUST_OPEN, `Named a return but colder than "${supply.column}", a supply`);
  }
}

function flowSteps(draft: Draft, options: PreviewOptions): void {
  if (draft.role !== 'primaryFlow' || draft.confidence < PERSON_DECIDES || draft.unit === null || !options.unitFlowGpm)
    return;
  const { toStored } = TREND_UNITS[draft.unit];
  const oneUnit = options.unitFlowGpm / toStored(1);
  const size = stepSize(draft.statistics.values, oneUnit);
  if (Math.abs(size - oneUnit) > oneUnit * STEP_SHARE || Number.isNaN(size)) return;
  bearOut(draft, `Takes steps of ${number(size)}, about one unit's design flow`);
}

/** So many of a role's columns are named in a reason. */
const MOST_NAMED = 4;

/** Several columns of one role are used together; the reason says how. */
function noteShared(drafts: readonly Draft[]): void {
  for (const draft of drafts) {
    if (draft.role === 'ignore') continue;
    const { role } = draft;
    const others = drafts.filter((each) => each !== draft && each.role === role && each.unitIndex === draft.unitIndex);
    if (others.length === 0) continue;
    const { quantity } = pointRole(role);
    const how =
      quantity === 'flow' || quantity === 'power'
        ? 'added up'
        : quantity === 'temperature'
          ? 'averaged'
          : 'used together';
    const shown = others.slice(0, MOST_NAMED).map(({ column }) => `"${column}"`);
    const names = [...shown, ...(others.length > MOST_NAMED ? [`${others.length - MOST_NAMED} more`] : [])].join(', ');
    draft.shown.push(`${how} with ${names}`);
  }
}
