import type { Quantity } from './units';

/** What a trend column is to the plant. The list and the names are the API's (version 1). */
export interface PointRole {
  quantity: Quantity;
  /** How pages name it. */
  label: string;
  /** One of many, told apart by `unitIndex` (a chiller or pump, from 1) or by `branchIndex`. */
  indexed?: 'unit' | 'branch';
}

export const POINT_ROLES = {
  primarySupplyTemp: { quantity: 'temperature', label: 'primary supply temperature' },
  primaryReturnTemp: { quantity: 'temperature', label: 'primary return temperature' },
  secondarySupplyTemp: { quantity: 'temperature', label: 'secondary supply temperature' },
  secondaryReturnTemp: { quantity: 'temperature', label: 'secondary return temperature' },
  bypassTemp: { quantity: 'temperature', label: 'bypass temperature' },
  primaryFlow: { quantity: 'flow', label: 'primary flow' },
  secondaryFlow: { quantity: 'flow', label: 'secondary flow' },
  bypassFlow: { quantity: 'flow', label: 'bypass flow, signed' },
  bypassFlowUnsigned: { quantity: 'flow', label: 'bypass flow, unsigned' },
  bypassValvePosition: { quantity: 'percent', label: 'bypass valve position' },
  headerSupplyTemp: { quantity: 'temperature', label: 'header supply temperature, side unknown' },
  unitStatus: { quantity: 'status', label: 'unit status', indexed: 'unit' },
  unitPower: { quantity: 'power', label: 'unit power', indexed: 'unit' },
  unitFlow: { quantity: 'flow', label: 'unit flow', indexed: 'unit' },
  unitLeavingTemp: { quantity: 'temperature', label: 'unit leaving temperature', indexed: 'unit' },
  unitEnteringTemp: { quantity: 'temperature', label: 'unit entering temperature', indexed: 'unit' },
  unitLoadPercent: { quantity: 'percent', label: 'unit load', indexed: 'unit' },
  unitSetpoint: { quantity: 'temperature', label: 'unit set-point', indexed: 'unit' },
  unitIsolationValve: { quantity: 'percent', label: 'unit isolation valve', indexed: 'unit' },
  unitEvaporatorDp: { quantity: 'pressure', label: 'evaporator pressure drop', indexed: 'unit' },
  primaryPumpStatus: { quantity: 'status', label: 'primary pump status', indexed: 'unit' },
  primaryPumpSpeed: { quantity: 'percent', label: 'primary pump speed', indexed: 'unit' },
  distributionPumpPower: { quantity: 'power', label: 'distribution pump power' },
  distributionPumpSpeed: { quantity: 'percent', label: 'distribution pump speed' },
  distributionPumpStatus: { quantity: 'status', label: 'distribution pump status' },
  plantPower: { quantity: 'power', label: 'plant power' },
  supplySetpoint: { quantity: 'temperature', label: 'supply set-point' },
  differentialPressure: { quantity: 'pressure', label: 'differential pressure' },
  differentialPressureSetpoint: { quantity: 'pressure', label: 'differential pressure set-point' },
  outdoorTemp: { quantity: 'temperature', label: 'outdoor temperature' },
  outdoorWetBulb: { quantity: 'temperature', label: 'outdoor wet-bulb temperature' },
  branchFlow: { quantity: 'flow', label: 'branch flow', indexed: 'branch' },
  branchSupplyTemp: { quantity: 'temperature', label: 'branch supply temperature', indexed: 'branch' },
  branchReturnTemp: { quantity: 'temperature', label: 'branch return temperature', indexed: 'branch' },
  branchValvePosition: { quantity: 'percent', label: 'branch valve position', indexed: 'branch' },
} as const satisfies Record<string, PointRole>;

export type PointRoleName = keyof typeof POINT_ROLES;
export const POINT_ROLE_NAMES = Object.keys(POINT_ROLES) as PointRoleName[];
/** A column that is deliberately left out. */
export const IGNORE_ROLE = 'ignore';
export type MappedRole = PointRoleName | typeof IGNORE_ROLE;

export const pointRole = (name: PointRoleName): PointRole => POINT_ROLES[name];
