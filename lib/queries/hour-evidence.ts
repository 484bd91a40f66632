import {
  formatBypass,
  formatDeltaT,
  formatFlow,
  formatInterval,
  formatLoad,
  formatMoney,
  formatNumber,
  formatPercent,
  formatPlusMinus,
  formatTemperature,
  NO_BREAK_SPACE,
  roundHalfAway,
  unitLabel,
  withUnit,
  type UnitSystem,
} from '../client/format';
import { errorWords, sensorName } from '../client/sensor-words';
import { litresPerSecondFromGpm } from '../units';
import { differenceReach, type HourFacts } from './hour-facts';

/** One sentence of evidence: the claim, then the numbers it rests on. */
export interface Evidence {
  claim: string;
  detail: string;
}

type Tell = (facts: HourFacts, units: UnitSystem) => Evidence | null;

/**
 * What speaks for the answer of an hour, in sentences with numbers and their 90 % intervals, from the sensors to the cause. A
 * sentence whose numbers are not there is left out. Numbers are printed in the units asked for, and differences are taken of
 * the printed numbers, so that a reader's own subtraction agrees.
 */
export function hourEvidence(facts: HourFacts, units: UnitSystem): Evidence[] {
  const told: readonly Tell[] = [
    correctedFirst,
    meters,
    commonPipe,
    temperatures,
    together,
    fit,
    blend,
    staging,
    flow,
    cause,
    care,
  ];
  return told.flatMap((tell) => tell(facts, units) ?? []);
}

const known = (...values: number[]): boolean => values.every((value) => !Number.isNaN(value));
const flowText = (flowGpm: number, units: UnitSystem) => withUnit(formatFlow(flowGpm, units), unitLabel('flow', units));
const degrees = (deltaF: number, units: UnitSystem) =>
  withUnit(formatDeltaT(deltaF, units), unitLabel('temperatureDifference', units));
const temperature = (tempF: number, units: UnitSystem) =>
  withUnit(formatTemperature(tempF, units), unitLabel('temperature', units));
/** A flow as printed, as a number again, in gpm or L/s. */
const printedFlow = (flowGpm: number, units: UnitSystem): number =>
  units === 'si' ? roundHalfAway(litresPerSecondFromGpm(flowGpm), 1) : roundHalfAway(flowGpm, 0);

/** What the calibration took out of the sensors before anything was worked out: why worked-out figures leave the measured ones. */
function correctedFirst({ corrected }: HourFacts, units: UnitSystem): Evidence | null {
  if (corrected.length === 0) return null;
  const each = corrected.map(
    ({ role, kind, value }) => `${lowered(sensorName(role))} reads ${errorWords(kind, value, units)}`,
  );
  const list = each.length === 1 ? each[0] : `${each.slice(0, -1).join(', ')} and ${each.at(-1) ?? ''}`;
  return {
    claim: 'Sensors were corrected.',
    detail: `By the record of the month ${list ?? ''}; what is worked out is free of that.`,
  };
}

const lowered = (text: string): string => text.charAt(0).toLowerCase() + text.slice(1);

function meters({ measured, plant }: HourFacts, units: UnitSystem): Evidence | null {
  const { primaryFlowGpm, secondaryFlowGpm } = measured;
  if (!known(primaryFlowGpm, secondaryFlowGpm)) {
    const missing = [
      ...(known(primaryFlowGpm) ? [] : ['production']),
      ...(known(secondaryFlowGpm) ? [] : ['distribution']),
    ];
    const detail = `The ${missing.join(' and the ')} side has no flow reading in this hour; the rest of the evidence has to carry the answer.`;
    return { claim: missing.length === 2 ? 'No meter speaks.' : 'One meter is silent.', detail };
  }
  const reach = differenceReach(
    (primaryFlowGpm * plant.sigma.primaryFlowPercent) / 100,
    (secondaryFlowGpm * plant.sigma.secondaryFlowPercent) / 100,
  );
  const difference = primaryFlowGpm - secondaryFlowGpm;
  const claim =
    Math.abs(difference) <= reach
      ? 'The meters do not say which way.'
      : difference < 0
        ? 'The meters say reverse.'
        : 'The meters say forward.';
  const printed = printedFlow(primaryFlowGpm, units) - printedFlow(secondaryFlowGpm, units);
  const shown = formatNumber(printed, { decimals: units === 'si' ? 1 : 0, sign: 'always' });
  const interval = withUnit(
    `${shown}${NO_BREAK_SPACE}${formatPlusMinus(reach, 'flow', units)}`,
    unitLabel('flow', units),
  );
  return {
    claim,
    detail: `Production ${flowText(primaryFlowGpm, units)}, distribution ${flowText(secondaryFlowGpm, units)}: ${interval}.`,
  };
}

function commonPipe({ measured, plant, workedOut }: HourFacts, units: UnitSystem): Evidence | null {
  const parts: string[] = [];
  if (known(measured.bypassFlowGpm)) {
    const reading = measured.bypassMeterSigned
      ? formatBypass(measured.bypassFlowGpm, units)
      : formatFlow(measured.bypassFlowGpm, units);
    const meter = measured.bypassMeterSigned ? 'its meter' : 'its meter, which does not know the direction,';
    parts.push(`${meter} read ${withUnit(reading, unitLabel('flow', units))}`);
  }
  const supplyF = known(measured.primarySupplyF) ? measured.primarySupplyF : workedOut.primarySupplyF;
  const returnF = known(measured.secondaryReturnF) ? measured.secondaryReturnF : workedOut.secondaryReturnF;
  let claim = 'The common pipe was read.';
  if (known(measured.bypassF, supplyF, returnF)) {
    const toSupply = Math.abs(measured.bypassF - supplyF);
    const toReturn = Math.abs(measured.bypassF - returnF);
    const reach = differenceReach(plant.sigma.bypassF, plant.sigma.primarySupplyF);
    parts.push(
      `its water stood at ${temperature(measured.bypassF, units)}, between a production supply of ${temperature(supplyF, units)} and a building return of ${temperature(returnF, units)}`,
    );
    if (Math.abs(toSupply - toReturn) > reach) {
      claim = toReturn < toSupply ? 'The common pipe held return water.' : 'The common pipe held supply water.';
    }
  }
  if (parts.length === 0) return null;
  const text = parts.join('; ');
  return { claim, detail: `${text.charAt(0).toUpperCase()}${text.slice(1)}.` };
}

function temperatures({ measured, plant }: HourFacts, units: UnitSystem): Evidence | null {
  const { sigma } = plant;
  const rise = measured.secondarySupplyF - measured.primarySupplyF;
  const gap = measured.secondaryReturnF - measured.primaryReturnF;
  const riseReach = differenceReach(sigma.primarySupplyF, sigma.secondarySupplyF);
  const gapReach = differenceReach(sigma.primaryReturnF, sigma.secondaryReturnF);
  if (!known(rise) && !known(gap)) return null;
  const warm = known(rise) && rise > riseReach;
  const diluted = known(gap) && gap > gapReach;
  const span = (deltaF: number, reach: number) =>
    withUnit(
      `${formatDeltaT(deltaF, units)}${NO_BREAK_SPACE}${formatPlusMinus(reach, 'temperatureDifference', units)}`,
      unitLabel('temperatureDifference', units),
    );
  const sentences: string[] = [];
  if (known(rise)) {
    sentences.push(
      warm
        ? `supply to the buildings stood ${span(rise, riseReach)} above production supply`
        : `the two supplies agree within ${degrees(Math.abs(rise), units)}`,
    );
  }
  if (known(gap)) {
    sentences.push(
      diluted
        ? `return to production stood ${span(gap, gapReach)} below the return from the buildings`
        : `the two returns agree within ${degrees(Math.abs(gap), units)}`,
    );
  }
  const claim =
    warm && diluted
      ? 'The temperatures say both ways.'
      : warm
        ? 'The temperatures say reverse.'
        : diluted
          ? 'The temperatures say forward.'
          : 'The temperatures do not say which way.';
  const both =
    warm && diluted ? ' Steady flow in one pipe cannot do both: a sensor is off, or the hour was mixed.' : '';
  const text = sentences.join(', and ');
  return { claim, detail: `${text.charAt(0).toUpperCase()}${text.slice(1)}.${both}` };
}

/** `above 0.999` rather than `1.000`: nothing here is certain. */
function probabilityText(probability: number): string {
  if (probability > 0.999) return `above${NO_BREAK_SPACE}0.999`;
  if (probability < 0.001) return `below${NO_BREAK_SPACE}0.001`;
  return formatNumber(probability, { decimals: probability > 0.99 || probability < 0.01 ? 3 : 2 });
}

function together({ workedOut }: HourFacts, units: UnitSystem): Evidence | null {
  const { direction, minutes, bypassFlowGpm, reverseProbability, reasons } = workedOut;
  const [reason] = reasons;
  if (workedOut.intervals === 0)
    return { claim: 'Nothing was worked out.', detail: 'No interval of this hour has data.' };
  const length = Object.values(minutes).reduce((sum, each) => sum + each, 0);
  const claims = {
    reverse: 'Together they say reverse.',
    forward: 'Together they say forward.',
    still: 'Together they say still.',
    unknown: 'Together they do not settle it.',
  } as const;
  const sentences: string[] = [];
  if (known(reverseProbability)) sentences.push(`Probability of reverse ${probabilityText(reverseProbability)}`);
  if (known(bypassFlowGpm.mean, bypassFlowGpm.lo, bypassFlowGpm.hi)) {
    const interval = formatInterval(bypassFlowGpm.lo, bypassFlowGpm.hi, 'flow', units, 'always');
    const mean = withUnit(formatBypass(bypassFlowGpm.mean, units), unitLabel('flow', units));
    sentences.push(`bypass ${mean} (${interval})`);
  }
  const split = (['reverse', 'forward', 'still', 'unknown'] as const)
    .filter((each) => minutes[each] > 0)
    .map((each) => `${each} ${formatNumber(minutes[each])}`)
    .join(', ');
  sentences.push(`of ${formatNumber(length)} min: ${split}`);
  const because = direction === 'unknown' && reason ? ` Why not: ${reason.reason}.` : '';
  return { claim: claims[direction], detail: `${capitalised(sentences.join('; '))}.${because}` };
}

/** Only told when it is so in most intervals: one in twenty is beyond its limit by chance. */
function fit({ workedOut: { fit: found } }: HourFacts): Evidence | null {
  if (found.told === 0 || found.beyond <= found.told / 2) return null;
  const odd =
    found.atOdds === null
      ? 'No one of them stands out.'
      : `The ${lowered(sensorName(found.atOdds))} is the most at odds with the rest: check it first.`;
  return {
    claim: 'The measurements do not fit together.',
    detail: `In ${formatNumber(found.beyond)} of ${formatNumber(found.told)} intervals they differ by more than their uncertainties allow. ${odd}`,
  };
}

const capitalised = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);

/** Share of a flow in percent, with the ends of its interval in order. */
function shareText(bounds: readonly [number, number, number], ofGpm: number): string {
  const [mean, first, second] = bounds.map((each) => Math.min(1, Math.max(0, each / ofGpm)));
  const lo = Math.min(first ?? NaN, second ?? NaN);
  const hi = Math.max(first ?? NaN, second ?? NaN);
  const percent = (share: number | undefined) => formatPercent(share);
  return `${percent(mean)}${NO_BREAK_SPACE}% (${percent(lo)} to ${percent(hi)}${NO_BREAK_SPACE}%)`;
}

function blend({ workedOut, plant }: HourFacts, units: UnitSystem): Evidence | null {
  const { direction, bypassFlowGpm: bypass } = workedOut;
  if (direction === 'reverse' && known(bypass.mean, workedOut.secondaryFlowGpm) && workedOut.secondaryFlowGpm > 0) {
    const share = shareText([-bypass.mean, -bypass.lo, -bypass.hi], workedOut.secondaryFlowGpm);
    const passage = known(workedOut.primarySupplyF, workedOut.blendedSupplyF.mean)
      ? `, so supply left production at ${temperature(workedOut.primarySupplyF, units)} and went out at ${temperature(workedOut.blendedSupplyF.mean, units)}`
      : '';
    const byDesign =
      plant.arrangement === 'building-bridge' && plant.blendedSupplyF !== null
        ? ` The bridge is designed to blend to ${temperature(plant.blendedSupplyF, units)}.`
        : '';
    return {
      claim: 'The blend.',
      detail: `${share} of the water to the buildings was their own return${passage}.${byDesign}`,
    };
  }
  if (direction === 'forward' && known(bypass.mean, workedOut.primaryFlowGpm) && workedOut.primaryFlowGpm > 0) {
    const share = shareText([bypass.mean, bypass.lo, bypass.hi], workedOut.primaryFlowGpm);
    const passage = known(workedOut.secondaryReturnF, workedOut.primaryReturnF)
      ? `, so return left the buildings at ${temperature(workedOut.secondaryReturnF, units)} and came back at ${temperature(workedOut.primaryReturnF, units)}`
      : '';
    return { claim: 'The dilution.', detail: `${share} of the production water crossed over unused${passage}.` };
  }
  return null;
}

function staging({ row, unitsRunning, plant }: HourFacts, units: UnitSystem): Evidence | null {
  if (unitsRunning === null || row.loadTons === null) return null;
  const load = withUnit(formatLoad(row.loadTons, units), unitLabel('load', units));
  const share = `${formatPercent(row.loadTons / plant.loadTons)}${NO_BREAK_SPACE}% of design`;
  const of = `${formatNumber(unitsRunning)} of ${formatNumber(plant.unitCount)} units ran at ${load}, ${share}`;
  const stranded =
    row.strandedTons !== null && row.strandedTons > 0
      ? `: ${withUnit(formatLoad(row.strandedTons, units), unitLabel('load', units))} more than the smallest set that carries this load`
      : '';
  return { claim: 'The staging.', detail: `${of}${stranded}.` };
}

function flow({ row, workedOut, plant }: HourFacts, units: UnitSystem): Evidence | null {
  const flows = [workedOut.primaryFlowGpm, workedOut.secondaryFlowGpm].filter((each) => known(each));
  if (row.excessFlowGpm === null || row.expectedDeltaTF === null || flows.length === 0) return null;
  const largest = Math.max(...flows);
  const expected = degrees(row.expectedDeltaTF, units);
  const excess = printedFlow(row.excessFlowGpm, units);
  if (excess <= 0) {
    return {
      claim: 'The flow.',
      detail: `${flowText(largest, units)}, no more than this load needs at its expected delta-T of ${expected}.`,
    };
  }
  const text = (value: number) =>
    withUnit(formatNumber(value, { decimals: units === 'si' ? 1 : 0 }), unitLabel('flow', units));
  const needed = printedFlow(largest, units) - excess;
  const avoidable =
    row.avoidableFlowGpm === null
      ? ''
      : ` ${capitalised(flowText(row.avoidableFlowGpm, units))} of that the plant could do without as it is built.`;
  return {
    claim: 'The flow.',
    detail: `At its expected delta-T of ${expected} this load needs ${text(needed)}; ${text(printedFlow(largest, units))} flowed, ${text(excess)} more.${avoidable}${price(row, plant)}`,
  };
}

function price(row: HourFacts['row'], plant: HourFacts['plant']): string {
  if (row.excessEnergyKwh === null || row.excessEnergyKwh <= 0) return '';
  const energy = `${formatNumber(row.excessEnergyKwh)}${NO_BREAK_SPACE}kWh`;
  const money =
    row.excessCost !== null && plant.currency !== null
      ? `, ${formatMoney(row.excessCost, 'hour')}${NO_BREAK_SPACE}${plant.currency}`
      : '';
  return ` It took ${energy} more${money}.`;
}

const CURED: Readonly<Record<HourFacts['row']['cause'], string>> = {
  none: '',
  'reverse-flow': 'stopping the reverse flow',
  'surplus-production': 'taking out the surplus of production flow',
  'coil-shortfall': 'restoring the coils’ own delta-T',
  'valve-leakage': 'closing the valves that leak',
  'warm-supply': 'bringing the supply back to its set-point',
  'idle-unit-flow': 'shutting off the water through idle units',
  'light-load': '',
  'sensor-doubt': '',
};

function cause({ row }: HourFacts): Evidence | null {
  if (row.low !== 1)
    return { claim: 'Not a low hour.', detail: 'Its delta-T lies within the plant’s own limits for its load.' };
  const confidence =
    row.causeConfidence === null ? '' : ` Confidence ${formatNumber(row.causeConfidence, { decimals: 2 })}.`;
  const name = row.cause.replaceAll('-', ' ');
  if (row.cause === 'none') {
    return { claim: 'No single cause.', detail: 'No cause, cured alone, would save as much as 3 % of design flow.' };
  }
  if (row.cause === 'sensor-doubt') {
    return {
      claim: 'The cause: sensor doubt.',
      detail: `The readings contradict each other so far that the verdict rests on which is believed; check the sensors first.${confidence}`,
    };
  }
  if (row.cause === 'light-load') {
    return {
      claim: 'The cause: light load.',
      detail: `At so little load the coils make less delta-T by their nature.${confidence}`,
    };
  }
  return {
    claim: `The cause: ${name}.`,
    detail: `Of all causes, ${CURED[row.cause]} alone would save the most flow at this load.${confidence}`,
  };
}

function care({ row, workedOut }: HourFacts): Evidence | null {
  const { steadyIntervals, intervals } = workedOut;
  const parts: string[] = [];
  if (intervals > 0 && steadyIntervals < intervals / 2) {
    parts.push(`only ${steadyIntervals} of ${intervals} intervals were steady`);
  }
  if (row.quality !== null && row.quality < 0.8) {
    parts.push(`${formatPercent(row.quality)}${NO_BREAK_SPACE}% of the inputs were measured and passed the checks`);
  }
  return parts.length === 0 ? null : { claim: 'Read with care.', detail: `${capitalised(parts.join(', and '))}.` };
}
