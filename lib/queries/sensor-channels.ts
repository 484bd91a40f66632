import type { Measurements } from '../hydronics/types';
import type { PointRoleName } from '../point-roles';

/** The channel of Measurements that a role feeds; a role without one is shown and does not enter the balance. */
export const ROLE_CHANNELS: Readonly<Partial<Record<PointRoleName, keyof Measurements>>> = {
  primarySupplyTemp: 'primarySupplyF',
  primaryReturnTemp: 'primaryReturnF',
  secondarySupplyTemp: 'secondarySupplyF',
  secondaryReturnTemp: 'secondaryReturnF',
  bypassTemp: 'bypassF',
  headerSupplyTemp: 'headerSupplyF',
  primaryFlow: 'primaryFlowGpm',
  secondaryFlow: 'secondaryFlowGpm',
  bypassFlow: 'bypassFlowGpm',
  bypassFlowUnsigned: 'bypassFlowUnsignedGpm',
  bypassValvePosition: 'bypassValvePercent',
  unitStatus: 'unitStatus',
  unitFlow: 'unitFlowGpm',
  unitLeavingTemp: 'unitLeavingF',
  unitEnteringTemp: 'unitEnteringF',
  unitPower: 'unitPowerKw',
  primaryPumpStatus: 'primaryPumpStatus',
  distributionPumpPower: 'distributionPumpPowerKw',
  plantPower: 'plantPowerKw',
  supplySetpoint: 'supplySetpointF',
  outdoorTemp: 'outdoorF',
};

/** The role that feeds a channel. */
export const roleOfChannel = (channel: string): string =>
  Object.entries(ROLE_CHANNELS).find(([, each]) => each === channel)?.[0] ?? channel;

/** The values of a role's channel; null where the record has none. */
export function channelOf(measurements: Measurements, role: string, unitIndex: number): Float64Array | null {
  const name = (ROLE_CHANNELS as Partial<Record<string, keyof Measurements>>)[role];
  const channel: unknown = name === undefined ? undefined : measurements[name];
  if (channel instanceof Float64Array) return channel;
  const unit: unknown = Array.isArray(channel) ? channel[unitIndex - 1] : undefined;
  return unit instanceof Float64Array ? unit : null;
}
