import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { formatNumber, formatPercent } from '@/lib/client/format';
import { DECIDED_PROBABILITY, STILL_SHARE } from '@/lib/hydronics/verdict';
import { NearZero } from './near-zero';
import { Exhibit, F, Formulas, Head, P, Part, T } from './parts';

/** What one interval says, from the comparisons to the interval near zero. */
export function OneInterval() {
  return (
    <Part
      id="interval"
      number={3}
      title="One interval"
      sub="both ways are supposed in turn, and weighed"
      beside={<Beside />}
    >
      <Head>The comparisons</Head>
      <P>
        Suppose the pipe runs one way and a share x of the main flow crosses over (of primary flow in forward, of
        secondary flow in reverse). Given x, every pair of measurements that must then agree is one comparison that
        should come out zero. The table has them all; what nobody measures drops out.
      </P>
      <Head>How they are weighed</Head>
      <P>
        The readings are corrected by what the whole record told of their lasting errors (part 4). Generalized least
        squares finds the share that the comparisons agree on best, with the full covariance of their errors: the noise
        of the readings; what is left of every offset, gain and zero, with what they have in common; what a plant
        departs from two ideal tees by, at least 0.04&nbsp;°F and 0.6&nbsp;% of flow; and, while a temperature moves,
        two minutes of its slope, for the water takes time between the sensors. The common pipe’s own temperature counts
        for little while hardly anything flows in it, for then it drifts towards the room.
      </P>
      <Head>The direction</Head>
      <P>
        For each way the likelihood of the readings is summed over every share it allows, not taken at the best one: a
        way that fits only at one lucky share is not as likely as one that fits at many. Before the readings both ways
        are equally likely, and shares thin out as they do over the whole record (the density falls off as exp(−x/m), m
        the record’s mean share). The probability of reverse is its likelihood over that of both. With flow meters alone
        this comes to the familiar
      </P>
      <Formulas>
        <span>P(reverse) = probability that a normal of mean b and standard uncertainty u(b) lies below zero</span>
      </Formulas>
      <P>
        <b>Still</b> is said when the bypass is more likely than not within {formatPercent(STILL_SHARE)}&nbsp;% of
        secondary flow of zero; <b>reverse</b> or <b>forward</b> when its probability is at least{' '}
        {formatNumber(DECIDED_PROBABILITY, { decimals: 2 })}; else <b>unknown</b>, with the reason.
      </P>
      <Head>The interval near zero</Head>
      <P>
        Each way gives a bypass with its uncertainty, a normal cut off at zero, since forward water does not run
        backward. The answer is both, joined at zero with their probabilities, and its interval runs from the point with
        5&nbsp;% below it to the point with 5&nbsp;% above. Far from zero that is plus and minus 1.645 standard
        uncertainties; near zero it reaches to both sides, and the sign stays open.
      </P>
      <Head>When measurements disagree</Head>
      <P>
        What is left over when the best share has been found is a chi-square, to be held against the number of
        comparisons beyond the unknowns. More than chance explains widens the intervals and weakens the odds, as if each
        stated uncertainty had four degrees of freedom. Beyond 3.5 standard uncertainties (a square of 12.25, and 3 for
        each further comparison) the direction is unknown: <b>sensors contradict</b>. The measurement whose error would
        explain most of it is named; where one comparison is all there is, nothing tells its members apart, and one of
        them stands for the group.
      </P>
      <P>
        One odd reading is set aside, at the most, and only where every reading that could be the odd one leaves the
        same clear way behind and the rest still checks itself. The disagreement stays on record.
      </P>
      <Head>Both ways within one interval</Head>
      <P>
        A pipe that hunts shows supply warmed and return diluted at once, which no single way explains. Where all four
        temperatures are there and neither way fits, this third possibility is weighed too, with a share each way, the
        smaller at least a quarter of the larger. Its prior grows with the length of the interval (0.4&nbsp;% for a
        minute) until the record shows how often this plant does it; meters that contradict it by three standard
        uncertainties rule it out. If it is the likelier, the direction is unknown, the net is given with its interval
        and the supply as measured.
      </P>
      <Head>What is averaged</Head>
      <P>
        Neighbouring readings are averaged in only as far as the record shows that nothing moves: evenly to both sides,
        up to 20&nbsp;minutes, while no channel’s mean departs from the inner one by more than its noise explains, and
        never over a change of state or of running units. What moves only with the bypass (where a mixed temperature
        lies between supply and return, secondary over primary flow) may be averaged up to 45&nbsp;minutes. Only noise
        shrinks so; lasting errors do not. One-minute intervals that share a wide window with their neighbours of the
        same four minutes share one answer.
      </P>
      <Head>Other arrangements</Head>
      <P>
        In a variable-primary plant the bypass runs forward or not at all: a direction is given when flow is clear of
        zero, and readings that speak for reverse are a contradiction, not a direction. A bypass valve less than
        2&nbsp;% open holds the share at zero within 1&nbsp;%. In a building bridge that blends by design the estimate
        is the same; only supply warmer than the designed blend is a fault.
      </P>
    </Part>
  );
}

function Beside() {
  return (
    <>
      <Exhibit
        name="The comparisons: each is zero but for errors"
        source="x is the share that crosses over. A bypass meter without a sign counts for either way."
      >
        <Table caption="The comparisons of both ways">
          <thead>
            <tr>
              <HeadCell>what is compared</HeadCell>
              <HeadCell>forward</HeadCell>
              <HeadCell>reverse</HeadCell>
            </tr>
          </thead>
          <tbody>
            <tr>
              <RowHead>two sensors in the unmixed stream</RowHead>
              <Cell>
                <T at="ss" /> − <T at="ps" />
              </Cell>
              <Cell>
                <T at="pr" /> − <T at="sr" />
              </Cell>
            </tr>
            <tr>
              <RowHead>the mixed stream with its parts</RowHead>
              <Cell>
                <T at="pr" /> − (1 − x) <T at="sr" /> − x <T at="ps" />
              </Cell>
              <Cell>
                <T at="ss" /> − (1 − x) <T at="ps" /> − x <T at="sr" />
              </Cell>
            </tr>
            <tr>
              <RowHead>the common pipe’s temperature with its stream</RowHead>
              <Cell>
                <T at="b" /> − <T at="ps" />
              </Cell>
              <Cell>
                <T at="b" /> − <T at="sr" />
              </Cell>
            </tr>
            <tr>
              <RowHead>the smaller main flow with the larger</RowHead>
              <Cell>
                <F at="s" /> − (1 − x) <F at="p" />
              </Cell>
              <Cell>
                <F at="p" /> − (1 − x) <F at="s" />
              </Cell>
            </tr>
            <tr>
              <RowHead>the bypass meter with the main flow</RowHead>
              <Cell>
                <F at="b" /> − x <F at="p" />
              </Cell>
              <Cell>
                −<F at="b" /> − x <F at="s" />
              </Cell>
            </tr>
          </tbody>
        </Table>
      </Exhibit>
      <Exhibit
        name="A bypass near zero: where it may lie, and the central 90&nbsp;% interval"
        source="An invented interval. Forward 70 ± 55&nbsp;gpm and reverse 20 ± 45&nbsp;gpm, each cut off at zero, joined with their probabilities."
      >
        <NearZero />
      </Exhibit>
      <Exhibit name="Why a direction is unknown">
        <Table caption="Why a direction is unknown" bare>
          <thead className="sr-only">
            <tr>
              <HeadCell>reason</HeadCell>
              <HeadCell>meaning</HeadCell>
            </tr>
          </thead>
          <tbody>
            {REASONS.map(([reason, meaning]) => (
              <tr key={reason}>
                <RowHead className="w-[38%] font-semibold!">{reason}</RowHead>
                <Cell>{meaning}</Cell>
              </tr>
            ))}
          </tbody>
        </Table>
      </Exhibit>
    </>
  );
}

const REASONS = [
  ['too near balance', 'neither way reaches the probability that names it'],
  ['temperatures too close', 'no flow tells, and supply and return are not clear of each other'],
  ['sensors contradict', 'neither way explains the readings'],
  ['both ways within the interval', 'the pipe hunts: the mean is of two streams'],
  ['off', 'the plant stands'],
  ['no data', 'nothing that was measured bears on the direction'],
] as const;
