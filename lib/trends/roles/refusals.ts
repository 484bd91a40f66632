import { TREND_UNITS, type Quantity } from '../../units';
import { says, type Draft } from './draft';
import type { Concept } from './vocabulary';

/** No chilled water, and no outdoor air either, is always this warm. */
const NEVER_CHILLED_F = 90;
/** Condenser words over water as cold as this are no condenser water. */
const COLD_WATER_F = 62;

export interface Refusal {
  confidence: number;
  reason: string;
}

/** Names of what no role reads; the first that fits counts. `unless`: other words that make it something else. */
const BY_NAME: readonly {
  concept: Concept;
  unless?: readonly Concept[];
  /** Quantities to which it does not apply. */
  quantities?: readonly Quantity[];
  confidence: number;
  reason: string;
}[] = [
  { concept: 'alarm', confidence: 0.8, reason: 'An alarm, not a reading' },
  {
    concept: 'refrigerant',
    quantities: ['power', 'percent', 'status'],
    unless: ['power', 'percent', 'load', 'status'],
    confidence: 0.8,
    reason: 'Inside the machine (refrigerant, oil or motor), not chilled water',
  },
  { concept: 'limit', confidence: 0.7, reason: 'A limit that somebody set, not a reading' },
  { concept: 'vane', confidence: 0.7, reason: 'Position of the guide vanes: no role reads it' },
  { concept: 'runtime', confidence: 0.8, reason: 'Hours or starts counted: only the present state is read' },
  {
    concept: 'elsewhere',
    unless: ['chilledWater', 'chiller', 'primary', 'secondary', 'bypass'],
    confidence: 0.75,
    reason: 'Of another system of the building, not of the chilled-water plant',
  },
  { concept: 'efficiency', confidence: 0.85, reason: 'Efficiency is worked out from power and load, not read' },
  {
    concept: 'energy',
    unless: ['flow', 'status'],
    confidence: 0.8,
    reason: 'A total of energy or volume: only rates are read',
  },
  { concept: 'humidity', confidence: 0.8, reason: 'Humidity: no role reads it' },
  {
    concept: 'delta',
    unless: ['differential', 'setpoint'],
    confidence: 0.8,
    reason: 'A temperature difference is worked out from the two sensors, not read',
  },
  {
    concept: 'tons',
    unless: ['power'],
    confidence: 0.75,
    reason: 'Cooling load is worked out from flow and temperatures, not read',
  },
  {
    concept: 'amps',
    unless: ['temperature', 'flow', 'power', 'percent', 'status'],
    confidence: 0.75,
    reason: 'Electric current: no role reads it',
  },
  { concept: 'hotWater', confidence: 0.8, reason: 'Heating water, not chilled water' },
  { concept: 'storage', unless: ['primary', 'secondary'], confidence: 0.6, reason: 'A storage tank: no role reads it' },
  { concept: 'quality', confidence: 0.8, reason: 'A quality mark or a note, not a reading' },
];

/** Why a column clearly is no point of the plant, or null. */
export function refusal(draft: Draft): Refusal | null {
  const { statistics, heading, name } = draft;
  if (says(draft, 'quality') && statistics.count === 0) return refused('quality');
  if (statistics.count === 0) {
    return statistics.words > 0
      ? { confidence: 0.85, reason: 'Holds words, not readings' }
      : { confidence: 0.6, reason: 'Holds no readings so far' };
  }
  const hot = alwaysHot(draft);
  if (hot) return hot;
  if (heading.unit === 'tons' && !says(draft, 'power')) return refused('tons');
  if (/rh|hum/i.test(heading.text)) return refused('humidity');
  if (/wh$|btu|gal$|m3$|m³$/i.test(heading.text)) return refused('energy');
  if (/^a$|^amps?$/i.test(heading.text)) return refused('amps');
  for (const { concept, unless, quantities, confidence, reason } of BY_NAME) {
    if (draft.quantity && quantities?.includes(draft.quantity)) continue;
    if (says(draft, concept) && !(unless && says(draft, ...unless)))
      return { confidence, reason: held(reason, name.says.get(concept)) };
  }
  if (says(draft, 'air') && !says(draft, 'outdoor', 'wetBulb', 'chilledWater'))
    return { confidence: 0.75, reason: held('Air, not chilled water', name.says.get('air')) };
  if (says(draft, 'condenser') && !isCold(draft))
    return {
      confidence: 0.85,
      reason: held('Condenser water or tower, not chilled water', name.says.get('condenser')),
    };
  if (statistics.onlyRises && draft.unit === null && !says(draft, 'temperature', 'setpoint'))
    return { confidence: 0.6, reason: 'Only ever rises: a running total or a row number' };
  return null;
}

const refused = (concept: Concept): Refusal => {
  const { confidence, reason } = BY_NAME.find((each) => each.concept === concept)!;
  return { confidence, reason };
};

const held = (reason: string, piece: string | undefined): string =>
  piece ? `${reason}; name holds "${piece}"` : reason;

function alwaysHot(draft: Draft): Refusal | null {
  const { statistics, unit, quantity } = draft;
  if (quantity !== 'temperature' || unit === null) return null;
  const lowF = TREND_UNITS[unit].toStored(statistics.low);
  if (!(lowF > NEVER_CHILLED_F)) return null;
  const limit = unit === 'degC' ? '32 °C' : `${NEVER_CHILLED_F} °F`;
  return { confidence: 0.88, reason: `Above ${limit} in every row: not chilled water` };
}

function isCold(draft: Draft): boolean {
  const { quantity, unit, statistics } = draft;
  return quantity === 'temperature' && unit !== null && TREND_UNITS[unit].toStored(statistics.median) < COLD_WATER_F;
}
