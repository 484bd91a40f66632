import type { PointRoleName } from '../../point-roles';
import type { PreviewOptions } from '../types';
import { says, type Draft } from './draft';
import { NUMBERED } from './names';
import type { Concept } from './vocabulary';

/** A role and how well the name bears it out; `ignore` with a note for a point that no role reads. */
export interface NamedRole {
  role: PointRoleName | 'ignore';
  confidence: number;
  /** Words of the name that count, for the reason. */
  concepts: readonly Concept[];
  note?: string;
}

/** Names that say quantity, side and direction are rarely wrong. */
const FULL = 0.9;
/** Something is left to what is usual. */
const LIKELY = 0.65;
/** A person has to look. */
const OPEN = 0.4;

/** The role a name gives a column of a known quantity, or null when it gives none. */
export function roleByName(draft: Draft, options: PreviewOptions): NamedRole | null {
  const found = byQuantity(draft, options);
  if (!found) return null;
  return says(draft, 'command') && draft.quantity === 'status'
    ? { ...found, confidence: Math.min(found.confidence, LIKELY), note: 'a command, which is not proof of running' }
    : found;
}

function byQuantity(draft: Draft, options: PreviewOptions): NamedRole | null {
  switch (draft.quantity) {
    case 'temperature':
      return temperatureRole(draft, options);
    case 'flow':
      return flowRole(draft);
    case 'power':
      return powerRole(draft, options);
    case 'status':
      return statusRole(draft, options);
    case 'percent':
      return percentRole(draft, options);
    case 'pressure':
      return pressureRole(draft);
    default:
      return null;
  }
}

const role = (name: NamedRole['role'], confidence: number, concepts: readonly Concept[], note?: string): NamedRole => ({
  role: name,
  confidence,
  concepts,
  note,
});

const isSetpoint = (draft: Draft) => says(draft, 'setpoint') || draft.name.setpointOrPump !== null;
/** What stands at a unit: its own points, or those of an evaporator, which only a unit has. */
const onUnit = (draft: Draft) => says(draft, 'chiller', 'evaporator');
/** A branch is one of several buildings or coils; a building without a number is the distribution side. */
const isBranch = (draft: Draft) =>
  says(draft, 'branch') && draft.name.index !== null && !onUnit(draft) && !says(draft, 'primary', 'bypass');
const onSecondary = (draft: Draft) => says(draft, 'secondary') || (says(draft, 'branch') && draft.name.index === null);

function temperatureRole(draft: Draft, options: PreviewOptions): NamedRole | null {
  if (says(draft, 'wetBulb')) return role('outdoorWetBulb', FULL, ['wetBulb', 'outdoor']);
  const out = says(draft, 'supply', 'leaving');
  const back = says(draft, 'return', 'entering');
  if (isSetpoint(draft)) {
    if (onUnit(draft)) return role('unitSetpoint', FULL, ['chiller', 'setpoint']);
    if (says(draft, 'outdoor', 'air')) return null;
    const clear = says(draft, 'chilledWater', 'supply', 'leaving', 'plant') && !back;
    return role('supplySetpoint', clear ? FULL : OPEN, ['supply', 'chilledWater', 'setpoint']);
  }
  if (says(draft, 'outdoor')) return role('outdoorTemp', FULL, ['outdoor', 'temperature']);
  if (says(draft, 'bypass')) return role('bypassTemp', FULL, ['bypass', 'temperature']);
  if (onUnit(draft)) {
    const [direction, unitRole] = back
      ? (['entering', 'unitEnteringTemp'] as const)
      : (['leaving', 'unitLeavingTemp'] as const);
    return role(unitRole, out === back ? OPEN : FULL, ['chiller', direction, 'supply', 'return', 'evaporator']);
  }
  if (isBranch(draft)) {
    // Water leaves a coil warm, and enters a building cold: only supply and return are clear.
    const warm = says(draft, 'return', 'leaving') && !says(draft, 'supply');
    const clear = says(draft, 'supply', 'return');
    return role(warm ? 'branchReturnTemp' : 'branchSupplyTemp', clear ? LIKELY : OPEN, [
      'branch',
      'supply',
      'return',
      'leaving',
    ]);
  }
  return looseUnitRole(draft, options) ?? sideRole(draft, out, back);
}

/**
 * "LWT 2" is a unit's although no chiller is named, and so is "LWT" where there is one unit. "CHWS 2" may be a unit's:
 * taken for a header, it would bring the water of an idle unit into every balance.
 */
function looseUnitRole(draft: Draft, options: PreviewOptions): NamedRole | null {
  if (says(draft, 'primary', 'secondary', 'branch', 'pump', 'plant')) return null;
  const number = draft.name.looseNumber;
  const numbered = number !== null && number <= options.unitCount;
  const panel = says(draft, 'leaving') !== says(draft, 'entering') && !says(draft, 'supply', 'return');
  if (panel && (numbered || options.unitCount === 1))
    return says(draft, 'entering')
      ? role('unitEnteringTemp', LIKELY, ['entering', 'chilledWater'], 'named as on a unit’s own panel')
      : role('unitLeavingTemp', LIKELY, ['leaving', 'chilledWater'], 'named as on a unit’s own panel');
  if (!numbered || says(draft, 'supply') === says(draft, 'return')) return null;
  const unitRole = says(draft, 'return') ? 'unitEnteringTemp' : 'unitLeavingTemp';
  return role(unitRole, OPEN, ['supply', 'return'], 'numbered as the units are; a header, perhaps');
}

function sideRole(draft: Draft, out: boolean, back: boolean): NamedRole | null {
  const concepts: Concept[] = [
    'chilledWater',
    'supply',
    'return',
    'leaving',
    'entering',
    'primary',
    'secondary',
    'branch',
  ];
  if (out === back) return null;
  const panel = says(draft, 'leaving', 'entering') && !says(draft, 'supply', 'return', 'plant', 'primary', 'secondary');
  if (onSecondary(draft)) return role(out ? 'secondarySupplyTemp' : 'secondaryReturnTemp', FULL, concepts);
  if (says(draft, 'primary')) return role(out ? 'primarySupplyTemp' : 'primaryReturnTemp', FULL, concepts);
  if (says(draft, 'pump')) return null;
  if (panel) {
    const note = 'of a unit or of the header: the name does not say';
    return role(out ? 'headerSupplyTemp' : 'secondaryReturnTemp', OPEN, concepts, note);
  }
  return out
    ? role('headerSupplyTemp', 0.55, concepts, 'does not say which side of the decoupler')
    : role('secondaryReturnTemp', OPEN, concepts, 'does not say which side of the decoupler');
}

function flowRole(draft: Draft): NamedRole | null {
  if (isSetpoint(draft) && !says(draft, 'flow')) return null;
  if (says(draft, 'bypass')) {
    const signed = draft.statistics.low < 0;
    return signed
      ? role('bypassFlow', FULL, ['bypass', 'flow'], 'goes below 0, so it carries the direction')
      : role('bypassFlowUnsigned', LIKELY, ['bypass', 'flow'], 'never below 0, so the direction is not in it');
  }
  if (onUnit(draft)) return role('unitFlow', FULL, ['chiller', 'evaporator', 'flow']);
  if (isBranch(draft)) return role('branchFlow', LIKELY, ['branch', 'flow']);
  if (onSecondary(draft)) return role('secondaryFlow', FULL, ['secondary', 'branch', 'flow']);
  if (says(draft, 'primary')) return role('primaryFlow', FULL, ['primary', 'flow']);
  if (says(draft, 'condenser')) return null;
  return says(draft, 'chilledWater', 'plant', 'supply', 'return', 'leaving', 'entering')
    ? role('secondaryFlow', OPEN, ['chilledWater', 'plant', 'flow'], 'does not say which side of the decoupler')
    : null;
}

function powerRole(draft: Draft, options: PreviewOptions): NamedRole | null {
  const secondaryPump = (says(draft, 'pump') && onSecondary(draft)) || draft.name.setpointOrPump !== null;
  if (secondaryPump || (onSecondary(draft) && !says(draft, 'chiller')))
    return role(
      'distributionPumpPower',
      secondaryPump ? FULL : LIKELY,
      ['secondary', 'pump', 'power'],
      pumpNote(draft),
    );
  if (pumpSide(draft, options) === 'secondary')
    return role('distributionPumpPower', LIKELY, ['pump', 'power'], 'a pump numbered beyond the units');
  if (says(draft, 'pump'))
    return role(
      'ignore',
      0.55,
      ['primary', 'pump'],
      'power of a production pump: the plant settings hold it as auxiliary power',
    );
  if (says(draft, 'chiller')) return role('unitPower', FULL, ['chiller', 'power']);
  return says(draft, 'plant') ? role('plantPower', FULL, ['plant', 'power']) : null;
}

const pumpNote = (draft: Draft): string | undefined =>
  draft.name.setpointOrPump && !says(draft, 'pump') ? '"SP" with power is the secondary pump' : undefined;

function statusRole(draft: Draft, options: PreviewOptions): NamedRole | null {
  if (says(draft, 'valve', 'isolation')) return null;
  const pump = pumpSide(draft, options);
  if (pump === 'secondary') return role('distributionPumpStatus', FULL, ['secondary', 'pump', 'status']);
  if (pump === 'primary') return role('primaryPumpStatus', FULL, ['primary', 'pump', 'status']);
  if (pump === 'unknown')
    return role(
      'primaryPumpStatus',
      0.55,
      ['pump', 'status'],
      'taken for a production pump, because the name says no side',
    );
  return says(draft, 'chiller') ? role('unitStatus', FULL, ['chiller', 'status', 'command']) : null;
}

function percentRole(draft: Draft, options: PreviewOptions): NamedRole | null {
  if (says(draft, 'bypass')) return role('bypassValvePosition', FULL, ['bypass', 'valve', 'position']);
  if (says(draft, 'hertz'))
    return role(speedRole(draft, options), OPEN, ['pump', 'hertz'], 'a frequency in Hz, not a percentage');
  if (isBranch(draft) && says(draft, 'valve', 'position'))
    return role('branchValvePosition', LIKELY, ['branch', 'valve']);
  if (says(draft, 'valve', 'isolation', 'position'))
    return says(draft, 'chiller') ? role('unitIsolationValve', FULL, ['chiller', 'isolation', 'valve']) : null;
  const moves = says(draft, 'speed', 'pump', 'primary', 'secondary') || draft.name.setpointOrPump !== null;
  if (moves && !says(draft, 'chiller')) {
    const isTarget =
      says(draft, 'setpoint') || (draft.name.setpointOrPump !== null && says(draft, 'secondary', 'primary', 'pump'));
    if (isTarget) return role(speedRole(draft, options), OPEN, ['speed'], 'a set-point, perhaps, and not a speed');
    const sure = pumpSide(draft, options) !== 'unknown' && says(draft, 'primary', 'secondary', 'pump');
    return role(speedRole(draft, options), sure ? FULL : 0.55, ['primary', 'secondary', 'pump', 'speed']);
  }
  if (onUnit(draft) && says(draft, 'setpoint', 'speed', 'position'))
    return role(
      'ignore',
      0.55,
      ['chiller', 'setpoint', 'speed', 'position'],
      'a set-point, speed or position, not a load',
    );
  return says(draft, 'chiller')
    ? role('unitLoadPercent', says(draft, 'load') ? FULL : LIKELY, ['chiller', 'load', 'percent'])
    : null;
}

const speedRole = (draft: Draft, options: PreviewOptions): PointRoleName =>
  pumpSide(draft, options) === 'secondary' || onSecondary(draft) ? 'distributionPumpSpeed' : 'primaryPumpSpeed';

/** Which side a pump is on: by name, or secondary when its number is beyond the number of units. */
function pumpSide(draft: Draft, options: PreviewOptions): 'primary' | 'secondary' | 'unknown' | null {
  if (onSecondary(draft) || (draft.name.setpointOrPump && !says(draft, 'pump'))) return 'secondary';
  if (!says(draft, 'pump')) return null;
  if (says(draft, 'primary')) return 'primary';
  return (draft.name.index ?? 1) > options.unitCount ? 'secondary' : 'unknown';
}

function pressureRole(draft: Draft): NamedRole | null {
  if (!says(draft, 'differential')) return role('ignore', OPEN, ['pressure'], 'one pressure, not a difference of two');
  if (says(draft, 'chiller', 'evaporator'))
    return role('unitEvaporatorDp', FULL, ['chiller', 'evaporator', 'differential']);
  return isSetpoint(draft)
    ? role('differentialPressureSetpoint', FULL, ['differential', 'setpoint'])
    : role('differentialPressure', FULL, ['differential']);
}

/**
 * The number of each chiller, pump and branch from 1. Numbers as they are where they fit the plant; counted from 0 where
 * the file has a number 0; else their last digits (CH-101 and CH-102 are units 1 and 2), else their order in the file.
 */
export function unitIndexes(drafts: readonly Draft[], options: PreviewOptions): Map<Draft, number | null> {
  const result = new Map<Draft, number | null>();
  for (const concept of NUMBERED) {
    const numbered = drafts.flatMap((draft) => {
      const number = says(draft, concept) ? draft.name.index : concept === 'chiller' ? draft.name.looseNumber : null;
      return number === null || result.has(draft) ? [] : { draft, number };
    });
    const said = numbered.filter(({ draft }) => draft.name.index !== null);
    // Loose numbers are a guess: they count only where no chiller is numbered, and where they could be units.
    const loose = numbered.filter(({ number }) => number <= options.unitCount);
    const numbers = (said.length > 0 ? said : loose).map(({ number }) => number);
    const count = numberingOf(
      [...new Set(numbers)],
      concept === 'branch' ? Number.POSITIVE_INFINITY : options.unitCount,
    );
    for (const { draft, number } of numbered) result.set(draft, count(number));
  }
  return result;
}

function numberingOf(numbers: readonly number[], most: number): (number: number) => number {
  const sorted = [...numbers].sort((a, b) => a - b);
  const fit = (count: (number: number) => number) =>
    sorted.every((number) => count(number) >= 1 && count(number) <= most) &&
    new Set(sorted.map(count)).size === sorted.length;
  const ways = [
    (number: number) => number,
    (number: number) => number + 1,
    (number: number) => number % 100,
    (number: number) => number % 10,
  ];
  const fitting = ways.find((count, i) => (i === 1 ? sorted[0] === 0 : true) && fit(count));
  if (fitting) return fitting;
  // More numbers than units: as they are, so that a person sees which is too many.
  if (sorted[0] === 0) return (number) => number + 1;
  return (number) => sorted.indexOf(number) + 1 || number;
}
