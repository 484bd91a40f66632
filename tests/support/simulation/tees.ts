/** What two tees make of two flows and two temperatures, constant density and specific heat. Filled again at each step. */
export interface SimulatedTees {
  bypassGpm: number;
  secondarySupplyF: number;
  primaryReturnF: number;
}

/**
 * Exact mixing at both tees. A side without flow keeps the temperature it had in `out`.
 *
 *   forward  Tss = Tps, Tpr = (Fs Tsr + b Tps) / Fp        reverse  Tpr = Tsr, Tss = (Fp Tps + |b| Tsr) / Fs
 */
export function mixTees(
  primaryGpm: number,
  secondaryGpm: number,
  primarySupplyF: number,
  secondaryReturnF: number,
  out: SimulatedTees,
): void {
  out.bypassGpm = primaryGpm - secondaryGpm;
  if (out.bypassGpm >= 0) {
    if (secondaryGpm > 0) out.secondarySupplyF = primarySupplyF;
    if (primaryGpm > 0) {
      out.primaryReturnF = (secondaryGpm * secondaryReturnF + out.bypassGpm * primarySupplyF) / primaryGpm;
    }
  } else {
    out.secondarySupplyF = (primaryGpm * primarySupplyF - out.bypassGpm * secondaryReturnF) / secondaryGpm;
    if (primaryGpm > 0) out.primaryReturnF = secondaryReturnF;
  }
}
