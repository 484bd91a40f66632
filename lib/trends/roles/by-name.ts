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
      return temperatureRole(draft);
    case 'flow':
      return flowRole(draft);
    case 'power':
      return powerRole(draft);
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
/** A branch is one of several buildings or coils; a building without a number is the distribution side. */
const isBranch = (draft: Draft) => says(draft, 'branch') && draft.name.index !== null && !says(draft, 'chiller');
const onSecondary = (draft: Draft) => says(draft, 'secondary') || (says(draft, 'branch') && draft.name.index === null);

function temperatureRole(draft: Draft): NamedRole | null {
  if (says(draft, 'wetBulb')) return role('outdoorWetBulb', FULL, ['wetBulb', 'outdoor']);
  const out = says(draft, 'supply', 'leaving');
  const back = says(draft, 'return', 'entering');
  if (isSetpoint(draft)) {
    if (says(draft, 'chiller')) return role('unitSetpoint', FULL, ['chiller', 'setpoint']);
    if (says(draft, 'outdoor', 'air')) return null;
    const clear = says(draft, 'chilledWater', 'supply', 'leaving', 'plant') && !back;
    return role('supplySetpoint', clear ? FULL : OPEN, ['supply', 'chilledWater', 'setpoint']);
  }
  if (says(draft, 'outdoor')) return role('outdoorTemp', FULL, ['outdoor', 'temperature']);
  if (says(draft, 'bypass')) return role('bypassTemp', FULL, ['bypass', 'temperature']);
  if (says(draft, 'chiller')) {
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
  return sideRole(draft, out, back);
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
  if (onSecondary(draft)) return role(out ? 'secondarySupplyTemp' : 'secondaryReturnTemp', FULL, concepts);
  if (says(draft, 'primary')) return role(out ? 'primarySupplyTemp' : 'primaryReturnTemp', FULL, concepts);
  if (says(draft, 'pump')) return null;
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
  if (says(draft, 'chiller')) return role('unitFlow', FULL, ['chiller', 'evaporator', 'flow']);
  if (isBranch(draft)) return role('branchFlow', LIKELY, ['branch', 'flow']);
  if (onSecondary(draft)) return role('secondaryFlow', FULL, ['secondary', 'branch', 'flow']);
  if (says(draft, 'primary')) return role('primaryFlow', FULL, ['primary', 'flow']);
  if (says(draft, 'condenser')) return null;
  return says(draft, 'chilledWater', 'plant', 'supply', 'return')
    ? role('secondaryFlow', OPEN, ['chilledWater', 'plant', 'flow'], 'does not say which side of the decoupler')
    : null;
}

function powerRole(draft: Draft): NamedRole | null {
  const secondaryPump = (says(draft, 'pump') && onSecondary(draft)) || draft.name.setpointOrPump !== null;
  if (secondaryPump || (onSecondary(draft) && !says(draft, 'chiller')))
    return role(
      'distributionPumpPower',
      secondaryPump ? FULL : LIKELY,
      ['secondary', 'pump', 'power'],
      pumpNote(draft),
    );
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

/** The number of a chiller or pump counts from 1 among those of the file, so that CH-101 and CH-102 are units 1 and 2. */
export function unitIndexes(drafts: readonly Draft[], options: PreviewOptions): Map<Draft, number | null> {
  const result = new Map<Draft, number | null>();
  for (const concept of NUMBERED) {
    const numbered = drafts.filter((draft) => draft.name.index !== null && says(draft, concept) && !result.has(draft));
    const numbers = [...new Set(numbered.map(({ name }) => name.index!))].sort((a, b) => a - b);
    const plain = numbers.every((number) => number <= options.unitCount) || concept === 'branch';
    for (const draft of numbered) result.set(draft, plain ? draft.name.index : numbers.indexOf(draft.name.index!) + 1);
  }
  return result;
}
