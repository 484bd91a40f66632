import { FLOWS, TEMPERATURES } from './loop-record';

/**
 * One interval as the estimator weighs it: corrected readings with the full covariance of their errors, noise and lasting
 * errors together. One such object is filled again for each slot.
 */
export interface SlotReading {
  /** Mixing scale, order PS PR SS SR TB. PS, SS and SR always hold a number: a vague one where nothing was measured. */
  temperatures: Float64Array;
  /** 1 where the temperature was measured. */
  measured: Uint8Array;
  /** 5 x 5, F^2. */
  temperatureCovariance: Float64Array;
  /** gpm, order FP FS FB; NaN where missing. */
  flows: Float64Array;
  /** 3 x 3, gpm^2. */
  flowCovariance: Float64Array;
  /** 5 x 3, F gpm: what a calibration ties together. */
  crossCovariance: Float64Array;
  bypassUnsigned: boolean;
  /** Primary flow is the rated flow of running pumps. */
  rated: boolean;
  /** Something outside the balance holds the share at zero within this sigma (a shut bypass valve); NaN: nothing does. */
  shutSigma: number;
}

export const emptySlotReading = (): SlotReading => ({
  temperatures: new Float64Array(TEMPERATURES).fill(Number.NaN),
  measured: new Uint8Array(TEMPERATURES),
  temperatureCovariance: new Float64Array(TEMPERATURES * TEMPERATURES),
  flows: new Float64Array(FLOWS).fill(Number.NaN),
  flowCovariance: new Float64Array(FLOWS * FLOWS),
  crossCovariance: new Float64Array(TEMPERATURES * FLOWS),
  bypassUnsigned: false,
  rated: false,
  shutSigma: Number.NaN,
});
