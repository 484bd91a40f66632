import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A UTC day of estimates, one array a channel; names what it was computed from. Arrays are read and written by lib/db/blocks only. */
export const ResultBlockEntity = defineEntity({
  name: 'ResultBlock',
  tableName: 'result_block',
  properties: {
    organizationId: p.uuid(),
    plantId: p.uuid().primary(),
    day: p.type('string').columnType('date').primary(),
    step: p.smallint(),
    settingsRevision: p.integer(),
    calibrationId: p.integer().default(0),
    kernelVersion: p.text(),
    inputHash: p.text(),
    direction: p.type('string').columnType('real[]').lazy(true, false).name('direction'),
    reverseProbability: p.type('string').columnType('real[]').lazy(true, false).name('reverse_probability'),
    bypassFlowGpm: p.type('string').columnType('real[]').lazy(true, false).name('bypass_flow_gpm'),
    bypassFlowLoGpm: p.type('string').columnType('real[]').lazy(true, false).name('bypass_flow_lo_gpm'),
    bypassFlowHiGpm: p.type('string').columnType('real[]').lazy(true, false).name('bypass_flow_hi_gpm'),
    blendedSupplyF: p.type('string').columnType('real[]').lazy(true, false).name('blended_supply_f'),
    blendedSupplyLoF: p.type('string').columnType('real[]').lazy(true, false).name('blended_supply_lo_f'),
    blendedSupplyHiF: p.type('string').columnType('real[]').lazy(true, false).name('blended_supply_hi_f'),
    primaryFlowGpm: p.type('string').columnType('real[]').lazy(true, false).name('primary_flow_gpm'),
    secondaryFlowGpm: p.type('string').columnType('real[]').lazy(true, false).name('secondary_flow_gpm'),
    primarySupplyF: p.type('string').columnType('real[]').lazy(true, false).name('primary_supply_f'),
    primaryReturnF: p.type('string').columnType('real[]').lazy(true, false).name('primary_return_f'),
    secondaryReturnF: p.type('string').columnType('real[]').lazy(true, false).name('secondary_return_f'),
    loadTons: p.type('string').columnType('real[]').lazy(true, false).name('load_tons'),
    loadDeltaTF: p.type('string').columnType('real[]').lazy(true, false).name('load_delta_t_f'),
    productionDeltaTF: p.type('string').columnType('real[]').lazy(true, false).name('production_delta_t_f'),
    steady: p.type('string').columnType('real[]').lazy(true, false).name('steady'),
    quality: p.type('string').columnType('real[]').lazy(true, false).name('quality'),
    state: p.type('string').columnType('real[]').lazy(true, false).name('state'),
    reason: p.type('string').columnType('real[]').lazy(true, false).name('reason'),
  },
});
export type ResultBlock = InferEntity<typeof ResultBlockEntity>;
