import type { Measurements } from './types';

/** The channels that the estimate reads, of those that exist for the plant. */
function inputChannels(measurements: Measurements): Float64Array[] {
  const channels = [
    measurements.primarySupplyF,
    measurements.primaryReturnF,
    measurements.secondarySupplyF,
    measurements.secondaryReturnF,
    measurements.bypassF,
    measurements.headerSupplyF,
    measurements.bypassValvePercent,
    measurements.primaryFlowGpm,
    measurements.secondaryFlowGpm,
    measurements.bypassFlowGpm,
    measurements.bypassFlowUnsignedGpm,
    ...measurements.unitStatus,
    ...measurements.unitFlowGpm,
    ...measurements.unitLeavingF,
    ...measurements.unitEnteringF,
    ...measurements.unitPowerKw,
    ...measurements.primaryPumpStatus,
  ];
  return channels.filter((channel) => channel !== undefined);
}

/**
 * Share of each slot's inputs that were measured: of the points that exist for the plant, those that are not missing.
 *
 * Shapes  `quality` has length n and is overwritten.
 * Units   0 to 1.
 * Gaps    a plant without any input point: 0 everywhere.
 * Throws  RangeError when `quality` or a channel has another length.
 */
export function markQuality(measurements: Measurements, quality: Float64Array): void {
  const channels = inputChannels(measurements);
  if (quality.length !== measurements.n) {
    throw new RangeError(`markQuality: quality has length ${quality.length}, the record ${measurements.n}`);
  }
  quality.fill(0);
  for (const channel of channels) {
    if (channel.length !== measurements.n) {
      throw new RangeError(`markQuality: a channel has length ${channel.length}, the record ${measurements.n}`);
    }
    for (let slot = 0; slot < channel.length; slot += 1) {
      if (!Number.isNaN(channel[slot])) quality[slot] = (quality[slot] as number) + 1;
    }
  }
  if (channels.length === 0) return;
  for (let slot = 0; slot < quality.length; slot += 1) quality[slot] = (quality[slot] as number) / channels.length;
}
