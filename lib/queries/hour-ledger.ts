import { closeAccount } from '../client/rounding';
import { celsiusDeltaFromFahrenheitDelta } from '../units';
import type { HourFacts } from './hour-facts';

export interface Ledger {
  load: number;
  blend: number;
  dilution: number;
  production: number;
}

const NOTHING: Ledger = { load: NaN, blend: NaN, dilution: NaN, production: NaN };

/**
 * The degrees of an hour: production = load + blend - dilution, in deg F, exactly. Load and production are the hour table's own
 * figures (load over flow on either side), so that the two never differ on one page; blend and dilution are what lies between.
 * In an hour that ran one way only, the other way's line is nothing. In a mixed hour both come from the temperatures at the
 * tees, and what the different weighting leaves over goes to the larger.
 *
 * Gaps    NaN for every line when the load or the production delta-T is not known.
 */
export function hourLedger({ row, workedOut }: Pick<HourFacts, 'row' | 'workedOut'>): Ledger {
  const load = row.deltaTF ?? NaN;
  const production = row.productionDeltaTF ?? NaN;
  const between = production - load;
  if (Number.isNaN(between)) return NOTHING;
  const { minutes } = workedOut;
  if (minutes.reverse > 0 && minutes.forward === 0) return { load, blend: between, dilution: 0, production };
  if (minutes.forward > 0 && minutes.reverse === 0) return { load, blend: 0, dilution: -between, production };
  let blend = workedOut.blendedSupplyF.mean - workedOut.primarySupplyF;
  let dilution = workedOut.secondaryReturnF - workedOut.primaryReturnF;
  if (Number.isNaN(blend) || Number.isNaN(dilution)) {
    return { load, blend: Math.max(0, between), dilution: Math.max(0, -between), production };
  }
  const leftOver = between - (blend - dilution);
  if (Math.abs(blend) >= Math.abs(dilution)) blend += leftOver;
  else dilution -= leftOver;
  return { load, blend, dilution, production };
}

/** The ledger as printed, to a tenth of a degree: totals rounded first, the lines between so that they lead from one to the other. */
export function printedLedger(ledger: Ledger, units: 'ip' | 'si'): Ledger {
  const inUnits = units === 'si' ? celsiusDeltaFromFahrenheitDelta : (value: number) => value;
  const [load = NaN, blend = NaN, dilution = NaN, production = NaN] = closeAccount(
    [
      { kind: 'total', amount: inUnits(ledger.load) },
      { kind: 'change', amount: inUnits(ledger.blend) },
      { kind: 'change', amount: -inUnits(ledger.dilution) },
      { kind: 'total', amount: inUnits(ledger.production) },
    ],
    1,
  );
  return { load, blend: blend + 0, dilution: 0 - dilution, production };
}
