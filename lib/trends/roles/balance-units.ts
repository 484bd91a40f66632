import { TREND_UNITS, type TrendUnitId } from '../../units';
import { runningAt, unitsOf, whereState } from './context-units';
import { doubt, JUST_OPEN, type Draft } from './draft';
import { alignedTo, factorOf, FEWEST_ROWS, medianOf, stored } from './pairing';

/**
 * Tons of cooling by 1 gpm and 1 F: 24 gpm F a ton, the trade's rounded factor for water (500 Btu/h by gpm and F).
 * Ten per cent do not matter here.
 */
const GPM_F_PER_TON = 24;
/** kW a ton of electric machines at work: the range holds no two of the flow units' factors. Common practice, no source. */
const USUAL_KW_PER_TON: readonly [low: number, high: number] = [0.38, 1.25];
/** Beyond these no machine works, so a named unit is wrong. Common practice, no source. */
const POSSIBLE_KW_PER_TON: readonly [low: number, high: number] = [0.06, 6];
/** Below this difference of temperatures the balance says nothing. */
const LEAST_DELTA_F = 2;
const FLOW_UNITS: readonly TrendUnitId[] = ['gpm', 'L/s', 'm3/h', 'L/min'];

/**
 * Settles units that neither heading nor range tells: flows by the energy balance against power, power by the balance
 * against flow, then flows by the other flows of the file. A named unit that no balance allows is doubted.
 *
 * Source  steady-flow energy balance; efficiencies of chillers as common practice has them.
 */
export function settleUnits(drafts: readonly Draft[]): void {
  for (const balance of balancesOf(drafts)) {
    const { flow, power } = balance;
    if (flow.unitOpen && !power.unitOpen) settleFlowUnit(balance);
    else if (power.unitOpen && !flow.unitOpen) settlePowerUnit(balance);
    else if (!power.unitOpen) checkBalance(balance);
  }
  followOthers(drafts, 'flow');
  followOthers(drafts, 'power');
}

interface Balance {
  flow: Draft;
  power: Draft;
  /** Median of flow times temperature difference, in the flow's own unit and F, while the machine runs. */
  flowF: number;
  /** Median power then, in the power column's own unit. */
  powerRead: number;
}

function balancesOf(drafts: readonly Draft[]): Balance[] {
  const balances: Balance[] = [];
  for (const unit of unitsOf(drafts)) {
    const balance = balanceOf(
      unit.find('unitFlow'),
      unit.find('unitPower'),
      unit.find('unitLeavingTemp'),
      unit.find('unitEnteringTemp'),
      (flow) => runningAt(unit, flow)?.running ?? null,
    );
    if (balance) balances.push(balance);
  }
  const one = (...roles: string[]) => drafts.find(({ role }) => roles.includes(role));
  const plant = balanceOf(
    one('primaryFlow'),
    one('plantPower'),
    one('primarySupplyTemp', 'headerSupplyTemp'),
    one('primaryReturnTemp'),
    () => null,
  );
  if (plant) balances.push(plant);
  return balances;
}

function balanceOf(
  flow: Draft | undefined,
  power: Draft | undefined,
  supply: Draft | undefined,
  back: Draft | undefined,
  runningOf: (flow: Draft) => Float64Array | null,
): Balance | null {
  if (!flow?.unit || !power?.unit || !supply?.unit || !back?.unit) return null;
  const [cold, warm, electric] = [alignedTo(flow, supply), alignedTo(flow, back), alignedTo(flow, power)];
  if (!cold || !warm || !electric) return null;
  const running = runningOf(flow) ?? electric.map((value) => (value > power.statistics.p95 * 0.2 ? 1 : 0));
  const deltaF = cold.map((value, i) => stored(back, warm[i]!) - stored(supply, value));
  const counts = running.map((state, i) => (state === 1 && deltaF[i]! > LEAST_DELTA_F ? 1 : 0));
  const products = whereState(
    flow.statistics.values.map((value, i) => value * deltaF[i]!),
    counts,
    1,
  );
  const flowF = medianOf(products);
  const powerRead = medianOf(whereState(electric, counts, 1));
  return products.length >= FEWEST_ROWS && flowF > 0 && powerRead > 0 ? { flow, power, flowF, powerRead } : null;
}

const kwPerTon = ({ flowF }: Balance, powerKw: number, gpmFactor: number): number =>
  powerKw / ((flowF * gpmFactor) / GPM_F_PER_TON);
const within = (value: number, [low, high]: readonly [number, number]) => value >= low && value <= high;
const gpmFactor = (unit: TrendUnitId) => TREND_UNITS[unit].toStored(1);

function settleFlowUnit(balance: Balance): void {
  const { flow, power, powerRead } = balance;
  const fits = FLOW_UNITS.map((unit) => ({
    unit,
    ratio: kwPerTon(balance, powerRead * factorOf(power), gpmFactor(unit)),
  })).filter(({ ratio }) => within(ratio, USUAL_KW_PER_TON));
  if (fits.length !== 1) return;
  const [{ unit, ratio }] = fits as [(typeof fits)[0]];
  settle(
    flow,
    unit,
    `${TREND_UNITS[unit].label} by the energy balance: ${ratio.toFixed(2)} kW a ton with "${power.column}"`,
  );
}

function settlePowerUnit(balance: Balance): void {
  const { flow, power, powerRead } = balance;
  const fits = (['kW', 'W'] as const).filter((unit) =>
    within(kwPerTon(balance, powerRead * TREND_UNITS[unit].toStored(1), factorOf(flow)), [0.2, 3]),
  );
  if (fits.length === 1) settle(power, fits[0]!, `${fits[0]} by the energy balance with "${flow.column}"`);
}

function checkBalance(balance: Balance): void {
  const { flow, power, powerRead } = balance;
  const ratio = kwPerTon(balance, powerRead * factorOf(power), factorOf(flow));
  if (within(ratio, POSSIBLE_KW_PER_TON)) return;
  doubt(
    flow,
    JUST_OPEN,
    `With "${power.column}" that would be ${ratio.toPrecision(2)} kW a ton, which no machine does: check the unit`,
  );
}

function settle(draft: Draft, unit: TrendUnitId, clause: string): void {
  draft.unit = unit;
  draft.unitFrom = 'values';
  draft.unitOpen = false;
  draft.unitClause = clause;
}

/** A file writes one quantity in one unit, nearly always: an open one follows those that are known. */
function followOthers(drafts: readonly Draft[], quantity: 'flow' | 'power'): void {
  const ofKind = drafts.filter(
    (draft) => draft.quantity === quantity && draft.role !== 'ignore' && draft.unit !== null,
  );
  const known = ofKind.filter(({ unitOpen }) => !unitOpen);
  const units = new Set(known.map(({ unit }) => unit!));
  if (units.size !== 1) return;
  const [unit] = units as unknown as [TrendUnitId];
  const largest = Math.max(...known.map(({ statistics }) => statistics.high));
  for (const draft of ofKind) {
    const { high } = draft.statistics;
    // A pump's kW stand beside a plant's; flows of one plant are nearer to each other.
    const reach = quantity === 'flow' ? 6 : 300;
    if (!draft.unitOpen || high <= 0 || high > largest * reach || high < largest / reach) continue;
    settle(draft, unit, `${TREND_UNITS[unit].label} as "${known[0]!.column}"`);
  }
}
