import { TREND_UNITS, type Quantity, type TrendUnitId } from '../../units';
import type { PreviewOptions } from '../types';
import { JUST_OPEN, says, type Draft } from './draft';
import { stepSize } from './statistics';

/** Chilled water between freezing point and coil outlet, in each unit; the three ranges do not meet. */
const CHILLED_RANGE: readonly (readonly [unit: TrendUnitId, low: number, high: number])[] = [
  ['degF', 33, 85],
  ['degC', 0.5, 29.5],
  ['K', 273.6, 303],
];
/** A flow fits a unit when its largest value is within this factor of the plant's design flow, or of one unit's. */
const FLOW_FACTOR = 2.5;
/** The same for the flow of a single unit: the factors between the units are larger than its square, but for gpm and m3/h. */
const UNIT_FLOW_FACTOR = 1.8;
/** A step this near to one unit's design flow is a unit's. */
const STEP_SHARE = 0.2;
/** kW that a unit takes at design by its flow: 10 F, 24 gpm F a ton, 0.65 kW a ton. Common practice, no source. */
const DESIGN_KW_PER_GPM = (10 / 24) * 0.65;
/** Power within this factor of the design's is in that unit; between W and kW lies 1000. */
const POWER_FACTOR = 8;
/** Pressure differences of chilled water in kPa; in psi they are smaller. */
const KPA_RANGE: readonly [low: number, high: number] = [20, 600];
/** Power beyond this many kW is more likely in W. */
const MOST_PLANT_KW = 20_000;

/** What kind of quantity a column carries: by its unit, else by its name, else by values that only one kind has. */
export function quantityOf(draft: Draft): Quantity | null {
  const { statistics, unit, heading } = draft;
  const named = quantityOfName(draft);
  if (unit) {
    return TREND_UNITS[unit].quantity;
  }
  if (statistics.stateWords > statistics.count / 2) return 'status';
  if (named === 'temperature' && heading.letter) return 'temperature';
  if (named) return named;
  if (statistics.binary) return 'status';
  return null;
}

function quantityOfName(draft: Draft): Quantity | null {
  const { statistics, name } = draft;
  if (says(draft, 'status', 'command') && statistics.binary) return 'status';
  if (says(draft, 'flow')) return 'flow';
  if (says(draft, 'power')) return 'power';
  if (says(draft, 'temperature', 'wetBulb')) return 'temperature';
  if (says(draft, 'differential', 'pressure')) return 'pressure';
  if (says(draft, 'speed', 'position', 'percent', 'load') && statistics.stateWords === 0) return 'percent';
  if (says(draft, 'valve') && !statistics.binary) return 'percent';
  if (says(draft, 'status', 'command')) return 'status';
  if (name.letterF && statistics.count > 0 && !says(draft, 'setpoint') && name.setpointOrPump === null)
    return letterF(draft);
  if (says(draft, 'chiller', 'pump') && statistics.binary) return 'status';
  const directed = says(draft, 'supply', 'return', 'leaving', 'entering', 'outdoor', 'setpoint');
  if (directed || (name.setpointOrPump !== null && !statistics.binary)) return 'temperature';
  if (says(draft, 'chilledWater') && !statistics.binary) return 'temperature';
  return says(draft, 'valve', 'isolation') ? 'percent' : null;
}

/** A bare `f` behind a name without any other quantity is a flow, unless it stands behind a direction. */
const letterF = (draft: Draft): Quantity =>
  says(draft, 'supply', 'return', 'leaving', 'entering', 'outdoor') ? 'temperature' : 'flow';

/** Fills in units that nothing names, from the values; `hint` is the unit other temperatures of the file are in. */
export function unitByValues(draft: Draft, hint: TrendUnitId | null, options: PreviewOptions): void {
  if (draft.unit !== null || draft.quantity === null) return;
  const set = (unit: TrendUnitId, from: Draft['unitFrom'], clause: string) => {
    draft.unit = unit;
    draft.unitFrom = from;
    draft.unitClause = clause;
  };
  const { statistics, quantity } = draft;
  if (quantity === 'status') return set('on/off', 'named', '');
  if (quantity === 'temperature') return temperatureUnit(draft, hint, set);
  if (quantity === 'flow') return flowUnit(draft, hint, options, set);
  if (quantity === 'percent') {
    const fraction = statistics.high <= 1.05 && !statistics.binary;
    return set(fraction ? 'fraction' : '%', 'values', fraction ? 'runs from 0 to 1' : '');
  }
  if (quantity === 'power') {
    if (draft.name.kilowatts) return set('kW', 'named', '');
    const watts = statistics.high > MOST_PLANT_KW;
    const designKw = (options.unitFlowGpm ?? 0) * DESIGN_KW_PER_GPM;
    if (designKw > 0 && !says(draft, 'pump')) {
      const fits = (kilowatts: number) =>
        kilowatts > designKw / POWER_FACTOR && kilowatts < designKw * POWER_FACTOR * options.unitCount;
      if (fits(statistics.high)) return set('kW', 'values', 'kW by the design flow');
      if (fits(statistics.high / 1000)) return set('W', 'values', 'W by the design flow');
    }
    return set(watts ? 'W' : 'kW', 'open', 'no unit is named: kW or W');
  }
  const metric = hint === 'degC' || hint === 'K';
  if (metric && statistics.median >= KPA_RANGE[0] && statistics.median <= KPA_RANGE[1])
    return set('kPa', 'values', 'kPa by its values, as the temperatures are metric');
  const range = `between ${number(statistics.low)} and ${number(statistics.high)}`;
  return set('psi', 'open', `${range}: could be psi, ft or kPa; choose the unit`);
}

type SetUnit = (unit: TrendUnitId, from: Draft['unitFrom'], clause: string) => void;

function temperatureUnit(draft: Draft, hint: TrendUnitId | null, set: SetUnit): void {
  const { heading, statistics } = draft;
  if (heading.letter) return set(heading.letter, 'named', '');
  const fitting = CHILLED_RANGE.find(([, low, high]) => statistics.median >= low && statistics.median <= high)?.[0];
  // Only chilled water is in a range that tells the unit; a machine room in degrees C reads as cold water in degrees F.
  const chilled =
    says(draft, 'chilledWater', 'chiller', 'primary', 'secondary') &&
    !says(draft, 'condenser', 'hotWater', 'refrigerant', 'setpoint');
  if (hint && chilled && fitting && fitting !== hint && statistics.count > 0)
    return set(
      fitting,
      'open',
      `${TREND_UNITS[fitting].label} by its values, though the others are in ${TREND_UNITS[hint].label}`,
    );
  if (hint) return set(hint, 'values', `unit as of the other temperatures`);
  const water = !says(draft, 'outdoor', 'wetBulb', 'air');
  if (water && fitting) return set(fitting, 'values', `${TREND_UNITS[fitting].label} by its values`);
  if (!water && statistics.high > 55) return set('degF', 'values', '°F by its values');
  return set('degF', 'open', 'no unit is named');
}

/** The unit in which the largest flow is nearest to the design flow; gpm where nothing speaks against it. */
function flowUnit(draft: Draft, hint: TrendUnitId | null, options: PreviewOptions, set: SetUnit): void {
  const { high, low } = draft.statistics;
  const most = Math.max(Math.abs(high), Math.abs(low));
  const one = options.unitFlowGpm;
  const metric = hint === 'degC' || hint === 'K';
  if (!one || most === 0) return set(metric ? 'L/s' : 'gpm', 'open', 'no unit is named');
  // A unit's own flow stays near its design; the plant's goes from one unit's to all of them.
  const ofUnit = says(draft, 'chiller', 'evaporator');
  const [least, largest] = ofUnit
    ? [one / UNIT_FLOW_FACTOR, one * UNIT_FLOW_FACTOR]
    : [one / FLOW_FACTOR, one * options.unitCount * FLOW_FACTOR];
  const fits = (['gpm', 'L/s', 'm3/h', 'L/min'] as const).filter((unit) => {
    const mostGpm = TREND_UNITS[unit].toStored(most);
    return mostGpm >= least && mostGpm <= largest;
  });
  const stepping = fits.filter((unit) => {
    const oneUnit = one / TREND_UNITS[unit].toStored(1);
    return Math.abs(stepSize(draft.statistics.values, oneUnit) - oneUnit) < oneUnit * STEP_SHARE;
  });
  if (fits.length > 1 && stepping.length === 1)
    return set(
      stepping[0]!,
      'values',
      `${TREND_UNITS[stepping[0]!].label} by its steps, each of one unit’s design flow`,
    );
  // Metric temperatures go with metric flows.
  const likely = fits.filter((unit) => metric === (unit !== 'gpm'));
  const unit = likely[0] ?? fits[0] ?? 'gpm';
  if (likely.length === 1) return set(unit, 'values', `${TREND_UNITS[unit].label} by the design flow`);
  return set(unit, 'open', 'no unit is named');
}

/** A named unit whose values cannot be right is left to a person. */
export function checkUnit(draft: Draft): string | null {
  if (draft.quantity !== 'temperature' || draft.unit === null || draft.statistics.count === 0) return null;
  const medianF = TREND_UNITS[draft.unit].toStored(draft.statistics.median);
  return medianF < -60 || medianF > 250
    ? `half of its values are beyond ${number(draft.statistics.median)} ${TREND_UNITS[draft.unit].label}`
    : null;
}

/** Water that moves in a plant, glycol and stopped machines included, in F. */
const WATER_F: readonly [low: number, high: number] = [20, 110];

/** A named unit in which half of a water temperature's values would be ice or bath water. */
export function checkWater(draft: Draft): string | null {
  if (draft.unit === null || draft.statistics.count === 0) return null;
  const medianF = TREND_UNITS[draft.unit].toStored(draft.statistics.median);
  if (medianF >= WATER_F[0] && medianF <= WATER_F[1]) return null;
  const label = TREND_UNITS[draft.unit].label;
  return `its median of ${number(draft.statistics.median)} ${label} is no chilled water: check the unit`;
}

/** Confidence for a role whose unit is open. */
export const OPEN_UNIT_CONFIDENCE = JUST_OPEN;

/** A value in a sentence: 44.0, 860, 2,505. */
export function number(value: number): string {
  const digits = Math.abs(value) < 100 ? 1 : 0;
  return value.toLocaleString('en-US', { minimumFractionDigits: digits, maximumFractionDigits: digits });
}
