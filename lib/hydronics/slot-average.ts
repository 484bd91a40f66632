import type { LoopRecord } from './loop-record';
import { readValues } from './read-slot';
import type { SlotValues } from './read-slot';
import type { SensorErrors } from './sensor-errors';

/** Reads one slot's values, averaged with neighbours where the record shows that nothing moves. */
export type SlotAverager = (slot: number, out: SlotValues) => void;

export function slotAverager(
  loop: LoopRecord,
  _errors: SensorErrors,
  _state: Float64Array,
  _steady: Float64Array,
): SlotAverager {
  return (slot, out) => readValues(loop, slot, out);
}
