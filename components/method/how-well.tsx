import { formatNumber, formatPercent } from '@/lib/client/format';
import { AccuracyTable, FleetTable, SensingTable, WeakTable } from './accuracy-tables';
import { ACCURACY, extremes, groupOf, HUNTING, measureOf, RIGHT_BEYOND_5 } from './accuracy';
import { Command, Exhibit, Head, P, Part } from './parts';

/** What the method reaches where the truth is known, where it is weak, and what it was held against. */
export function HowWell() {
  const all = groupOf('all');
  const near = groupOf('near balance');
  const hunting = ACCURACY.fleets[0]?.plants[HUNTING];
  const oneWay = extremes('mostly-forward', 'ratio');
  const bareNear = 'temperatures near-balance';
  const perfect = ACCURACY.perfect.groups;
  const times = (value: number) => formatNumber(value, { decimals: 2 });
  const share = (value: number | undefined) => formatPercent(value, 1);
  return (
    <Part
      id="accuracy"
      number={6}
      title="How well it does"
      sub={`kernel ${ACCURACY.kernelVersion}, against known truth and published values`}
      beside={<Beside />}
    >
      <P>
        No plant tells its true bypass, so the error is measured where the truth is known: on simulated plants.{' '}
        <b>The project simulates them itself.</b> The simulator shares no code with the estimator, and the estimator is
        told no more than a plant’s settings would say; but a simulator holds only the trouble that its author thought
        of. Take the figures as what the method does when the plant behaves as supposed; part 7 tests the supposition.
      </P>
      <P>
        A fleet is {all.plants} plants, a week at five minutes each, {formatNumber(all.intervals)} running intervals:
        two to four units of constant or variable speed, coils, staging, schedules, water that takes time. Sensors have
        noise of 0.05 to 0.3&nbsp;°F, offsets up to 1&nbsp;°F, gains off by up to 5&nbsp;%, zeros, lags, spikes and
        gaps; rated flows are off by some 5&nbsp;% a pump and 3&nbsp;% all together. Screening and calibration run as in
        the product, on that week. Every interval counts alike.
      </P>
      <P>
        <b>Right</b> is counted over the intervals that were given a direction. Still counts as right only where the
        truth is within 2&nbsp;% of secondary flow of zero, so that calling a trickle of 3&nbsp;% still is an error:
        most of what the first line misses is that. The goals were set before the estimator was built; what falls short
        of one is in bold.
      </P>
      <P>
        <b>The textbook formula</b> is computed on the same raw readings, held to what pumps and pipes can do. The ratio
        is the root-mean-square error of the bypass over that of the formula.
      </P>
      <Head>Where it is weak</Head>
      <P>
        <b>Near balance.</b> Where a plant runs within a few per cent of balance for most of its hours, direction is
        right in {share(measureOf(near, RIGHT_BEYOND_5).value)}&nbsp;% of the intervals beyond 5&nbsp;%, in place of{' '}
        {share(measureOf(all, RIGHT_BEYOND_5).value)}&nbsp;% over all; the Brier score is{' '}
        {formatNumber(measureOf(near, 'Brier score').value, { decimals: 3 })}; reverse flow that is small is often
        called still or unknown. With sensors that have noise but no lasting error, the same plants reach{' '}
        {share(perfect['near balance']?.measures[RIGHT_BEYOND_5]?.value)}&nbsp;%: most of what is missing there is not
        calibration.
      </P>
      <P>
        <b>Temperatures only.</b> With noisy sensors, no flow and a plant near balance, as much as{' '}
        {share(1 - extremes(bareNear, 'given').least)}&nbsp;% of the intervals stays unknown, and of those beyond
        5&nbsp;% that are given a direction as little as {share(extremes(bareNear, '>5 %').least)}&nbsp;% are right.
      </P>
      <P>
        <b>Hunting.</b> A pipe that swings within the interval is not two steady tees. In the plant that hunts, the
        90&nbsp;% interval of the bypass holds the truth in {share(hunting?.['cover b'])}&nbsp;% and that of the blended
        supply in {share(hunting?.['cover F'])}&nbsp;%: both are far too sure.
      </P>
      <P>
        <b>One way all along.</b> In a plant that never runs backward the direction is beyond doubt, but its two returns
        are never one stream, and their offset is not tied. How much crosses over is then hardly better known than by
        the plain formula: the bypass error of such plants is {times(oneWay.least)} to {times(oneWay.most)} times the
        formula’s, against {times(measureOf(all, 'RMSE of b / textbook').value)} over all.
      </P>
      <P>
        <b>Blended supply.</b> Its interval is too narrow in some plants, most of all near balance: an offset that the
        two supply sensors share moves the answer and shows nowhere. Without lasting errors the interval holds the truth
        in {share(perfect.all?.measures['coverage of blended supply']?.value)}&nbsp;%, with them in{' '}
        {share(measureOf(all, 'coverage of blended supply').value)}&nbsp;%. A spot check of one supply sensor is worth
        more here than any statistics.
      </P>
      <Head>Where these figures come from</Head>
      <P>
        <Command>node --import tsx tests/bench/accuracy.bench.ts</Command> prints fleet 0; <Command>--fleet 1</Command>{' '}
        and so on another, <Command>--plants</Command> a line for each plant, <Command>--perfect</Command> the plants
        without lasting errors. <Command>node --import tsx tests/bench/write-accuracy.ts</Command> runs them all and
        renews these tables.
      </P>
    </Part>
  );
}

function Beside() {
  return (
    <>
      <Exhibit name="Fleet 0: all plants, and those that run near balance">
        <AccuracyTable />
      </Exhibit>
      <Exhibit
        name="Fleet 0 by what measures the flows"
        source="Bold where it falls short of the goal that the bench prints beside it; each kind of sensing has its own."
      >
        <SensingTable />
      </Exhibit>
      <Exhibit name="Other fleets: what was tuned on fleet 0 is tried on plants drawn anew">
        <FleetTable />
      </Exhibit>
      <Exhibit name="Single plants of fleet 0 where it is weak">
        <WeakTable />
      </Exhibit>
    </>
  );
}
