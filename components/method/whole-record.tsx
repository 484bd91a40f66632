import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { formatNumber, formatPercent } from '@/lib/client/format';
import { limitSentence } from '@/lib/client/sensor-words';
import { plantModelFromSettings } from '@/lib/hydronics/plant-model';
import { CALIBRATION_LIMITS } from '@/lib/schemas/sensors';
import { Exhibit, F, Head, P, Part, T } from './parts';

/** What stands for a plant of which nobody has given more than the least, but for the head of its pumps. */
const HEAD_FT = 80;
const { model: plant } = plantModelFromSettings(
  {
    fluid: { kind: 'water', massPercent: 0 },
    design: {
      productionSupplyF: 44,
      productionUnits: [{ tons: 500, flowGpm: 1000 }],
      distributionPumps: { headFt: HEAD_FT },
      blendedSupplyF: null,
      pumping: {},
      standbyUnits: 0,
    },
    tariff: null,
    sensors: {},
    low: { loadShare: 0.15, deltaTShare: 0.8 },
  },
  'primary-secondary',
);
const { temperatureSigmaF, flowSigmaPercent } = plant.sensors;

/** How the record as a whole tells the lasting errors of its sensors. */
export function WholeRecord() {
  return (
    <Part
      id="record"
      number={4}
      title="The whole record"
      sub="what a month of it tells of each sensor"
      beside={<Beside />}
    >
      <P>
        A sensor’s noise differs from reading to reading; its offset, or a meter’s gain and zero, does not. One interval
        cannot tell that error from flow. A record can, where it holds hours in which physics ties the sensors to each
        other. The lasting errors are fitted jointly: an offset of each temperature, gain and zero of each meter.
      </P>
      <P>
        This calibration is fitted once for each calendar month, on the days that the month holds; fewer than seven are
        filled up from the nearest days of the months beside it. It is a function of what is stored, whatever the order
        in which it came.
      </P>
      <Head>How it is fitted</Head>
      <P>
        Steady running stretches are averaged to quarters of an hour. In each, both ways are weighed as in part 3; then
        the errors are moved to where the stretches fit best under the ways they are likely to be; then the ways are
        weighed again (expectation and maximisation). The share that crosses over is <b>profiled</b>: each stretch may
        take the share that suits it. Integrating over it would reward errors that make the delta-T small, and draw
        offsets degrees away where a meter is missing. A way less likely than one in ten counts for nothing, stretches
        that fit badly count for less, and those beyond a chi-square of 40 for nothing.
      </P>
      <P>
        Two explanations often fit nearly alike: these sensors and that flow, or those and this. So the search begins
        from several starts (sensors as they are; supplies and returns that meet where they come closest; meters that
        disagree by 3.5 and 7&nbsp;% either way) and takes the one of the highest likelihood, with the sensors’ classes
        weighing in and no single stretch deciding.
      </P>
      <Head>How sure it is</Head>
      <P>
        The sensors’ classes are the prior: what nobody has said of a sensor is taken from the table. Where the offsets
        that the record does tell are larger than their class, the class of all of them is widened, up to twice; where
        they are smaller, it is narrowed to 0.7 at the least. A loop that is further from two ideal tees than
        0.04&nbsp;°F and 0.6&nbsp;% widens that allowance for itself, up to eightfold.
      </P>
      <P>
        Neighbouring readings err together, so an hour counts as one comparison at the most, and the covariance is
        judged by how stretches of four hours disagree with each other, never by the number of readings. What the record
        does not tell stays where the class has it, with the class’s doubt. The whole covariance, with what two errors
        have in common, goes into every interval: that is why a week of one-minute data does not make an offset go away.
      </P>
      <Head>Rated flow in place of a meter</Head>
      <P>
        Without a primary meter the rated flow of the pumps that run stands in, where pumps have one speed. It gets a
        gain for each set of units that runs together, since two pumps on one system do not make twice the flow of one:
        seven sets at the most, and one for all others. Of the doubt of a rated flow 70&nbsp;% is taken as common to all
        sets. Units’ leaving temperatures that stand in for the supply get an offset for each set likewise.
      </P>
      <Head>The header sensor</Head>
      <P>
        A supply header sensor of which nobody knows the side of the tee is placed by the record: beside the supply
        sensor whose place is known, it either keeps its distance (same side) or departs by the blend whenever the pipe
        runs backward (other side). The side is named at a probability of 0.9, and the sensor then serves there if no
        other does; without reverse flow the side stays unknown and the sensor is left out.
      </P>
      <Head>Pump heat</Head>
      <P>
        A secondary supply sensor usually sits behind the distribution pumps, whose losses warm the water. Where someone
        has given the pumps’ head, that rise is taken off before anything is compared: (1 / efficiency − 1) times head,{' '}
        {formatNumber(plant.distributionRiseF, { decimals: 2 })}&nbsp;°F at {HEAD_FT}&nbsp;ft and{' '}
        {formatPercent(plant.distributionPumps.efficiency)}&nbsp;%. It is taken as constant, at the design head and
        efficiency. Without a head it is not modelled apart: it is then part of the offset between the two supply
        sensors.
      </P>
      <Head>Which sensor next</Head>
      <P>
        To say what a further sensor would do, intervals spread over the running record are weighed again as if it had
        been there, reading what the estimate expects, with its usual uncertainty (0.17&nbsp;°F, or 1.5&nbsp;% for a
        meter; in the common pipe 0.3&nbsp;°F and 3&nbsp;%). What is listed is by how much the bypass interval narrows
        and how many hours cease to be unknown.
      </P>
    </Part>
  );
}

function Beside() {
  return (
    <>
      <Exhibit name="What ties which sensor">
        <Table caption="What ties which sensor">
          <thead>
            <tr>
              <HeadCell>in</HeadCell>
              <HeadCell>what must hold</HeadCell>
              <HeadCell>what it tells</HeadCell>
            </tr>
          </thead>
          <tbody>
            <tr>
              <RowHead>clear forward flow</RowHead>
              <Cell>
                <T at="ss" /> = <T at="ps" />, one stream
              </Cell>
              <Cell>the offset between the supplies</Cell>
            </tr>
            <tr>
              <RowHead>clear reverse flow</RowHead>
              <Cell>
                <T at="pr" /> = <T at="sr" />, one stream
              </Cell>
              <Cell>the offset between the returns</Cell>
            </tr>
            <tr>
              <RowHead>either, as load and units vary</RowHead>
              <Cell>load = production over both tees</Cell>
              <Cell>the ratio of the meters’ gains, their zeros, the mixed sensors’ offsets</Cell>
            </tr>
            <tr>
              <RowHead>either, with three meters</RowHead>
              <Cell>
                <F at="p" /> − <F at="s" /> = <F at="b" />
              </Cell>
              <Cell>each gain beside the others</Cell>
            </tr>
            <tr>
              <RowHead>a spot check</RowHead>
              <Cell>the reference’s reading, within its own uncertainty</Cell>
              <Cell>that sensor, and through the ties all others</Cell>
            </tr>
          </tbody>
        </Table>
      </Exhibit>
      <Exhibit
        name="What a sensor is taken for until someone gives its own (k = 1)"
        source="Installed, not as catalogued. Resistance thermometer of class B at 45&nbsp;°F from memory of IEC 60751; the others are common practice, no source."
      >
        <Table caption="What a sensor is taken for until someone gives its own" className="max-w-[520px]" bare>
          <thead className="sr-only">
            <tr>
              <HeadCell>sensor</HeadCell>
              <HeadCell numeric>standard uncertainty</HeadCell>
            </tr>
          </thead>
          <tbody>
            <ClassRow
              name="loop temperature"
              value={`${formatNumber(temperatureSigmaF.primarySupplyTemp, TWO)}\u00a0°F`}
            />
            <ClassRow
              name="temperature in the common pipe"
              value={`${formatNumber(temperatureSigmaF.bypassTemp, TWO)}\u00a0°F`}
            />
            <ClassRow
              name="flow meter, gain"
              value={`${formatNumber(flowSigmaPercent.primaryFlow)}\u00a0% of reading`}
            />
            <ClassRow name="flow meter in a main, zero" value="0.5&nbsp;% of design flow" />
            <ClassRow name="flow meter in the common pipe, zero" value="1&nbsp;% of design flow" />
            <ClassRow
              name="rated flow of running pumps"
              value={`${formatNumber(flowSigmaPercent.ratedFlow)}\u00a0% of reading`}
            />
          </tbody>
        </Table>
      </Exhibit>
      <Exhibit
        name="What no record can tell, and what settles it"
        source="The Sensors page of a plant lists those that hold for it. Enter a spot check there: the reading of a reference instrument, its uncertainty, what the plant’s sensor showed."
      >
        <ul className="border-t border-ink">
          {CALIBRATION_LIMITS.map((limit) => (
            <li key={limit} className="border-b border-grid py-1.5 text-pretty">
              {limitSentence(limit)}
            </li>
          ))}
        </ul>
      </Exhibit>
    </>
  );
}
const TWO = { decimals: 2 };

function ClassRow({ name, value }: { name: string; value: string }) {
  return (
    <tr>
      <RowHead>{name}</RowHead>
      <Cell numeric>{value}</Cell>
    </tr>
  );
}
