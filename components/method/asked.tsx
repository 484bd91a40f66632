import { DirectionMark } from '@/components/marks/direction-mark';
import { Caution } from '@/components/ui/caution';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { formatNumber, formatPercent } from '@/lib/client/format';
import { DIRECTION_MEANS, type Direction } from '@/lib/client/words';
import { DECIDED_PROBABILITY, STILL_SHARE } from '@/lib/hydronics/verdict';
import { Exhibit, P, Part } from './parts';

const WHEN: Readonly<Record<Direction, string>> = {
  forward: `probability of reverse at most ${formatNumber(1 - DECIDED_PROBABILITY, { decimals: 2 })}`,
  reverse: `probability of reverse at least ${formatNumber(DECIDED_PROBABILITY, { decimals: 2 })}`,
  still: `more likely than not within ${formatPercent(STILL_SHARE)}\u00a0% of secondary flow of zero`,
  unknown: 'neither; the reason is given',
};

const ANSWERS = [
  ['direction', 'forward, reverse, still or unknown; never forced'],
  ['probability of reverse', '0 to 1, also where the direction is unknown'],
  ['bypass flow', 'gpm, positive from supply to return, with its central 90\u00a0% interval'],
  ['blended supply', '°F at the supply tee, with its central 90\u00a0% interval'],
  ['both mains, four temperatures', 'reconciled: moved by what the balances say of their errors'],
  ['load and both delta-T', 'from the reconciled values'],
  ['fit', 'squared disagreement, comparisons left over, the measurement most at odds'],
  [
    'plant state, steadiness, quality',
    'off, starting, running, coasting or unknown; share of the inputs that were there',
  ],
] as const;

/** What is asked of a record, and what the answer is never to be taken for. */
export function Asked() {
  return (
    <Part
      id="asked"
      number={1}
      title="What is asked"
      sub="for every interval of the record"
      beside={
        <>
          <Exhibit name="What one interval’s answer holds">
            <Table caption="What one interval’s answer holds" bare>
              <thead className="sr-only">
                <tr>
                  <HeadCell>quantity</HeadCell>
                  <HeadCell>form</HeadCell>
                </tr>
              </thead>
              <tbody>
                {ANSWERS.map(([quantity, form]) => (
                  <tr key={quantity}>
                    <RowHead className="w-[38%] font-semibold!">{quantity}</RowHead>
                    <Cell>{form}</Cell>
                  </tr>
                ))}
              </tbody>
            </Table>
          </Exhibit>
          <Exhibit name="The four directions">
            <Table caption="The four directions" bare>
              <thead className="sr-only">
                <tr>
                  <HeadCell>direction</HeadCell>
                  <HeadCell>meaning</HeadCell>
                  <HeadCell>given when</HeadCell>
                </tr>
              </thead>
              <tbody>
                {(['forward', 'reverse', 'still', 'unknown'] as const).map((direction) => (
                  <tr key={direction}>
                    <RowHead className="font-semibold! whitespace-nowrap">
                      <DirectionMark direction={direction} className="mr-2" />
                      {direction}
                    </RowHead>
                    <Cell>{DIRECTION_MEANS[direction]}</Cell>
                    <Cell className="text-ink-2">{WHEN[direction]}</Cell>
                  </tr>
                ))}
              </tbody>
            </Table>
          </Exhibit>
        </>
      }
    >
      <P>
        Which way did the common pipe flow, how much, and how warm was the supply that the buildings were sent? The
        record holds whatever the plant trends: any of five temperatures, three flows, the units’ status, flow, power
        and leaving temperatures. None in particular is required.
      </P>
      <P>
        Every number comes with how sure it is. A central 90&nbsp;% interval leaves 5&nbsp;% of the probability below it
        and 5&nbsp;% above. It holds the sensors’ noise, their lasting errors as far as the record has not told them,
        and what a real plant departs from two ideal tees by.
      </P>
      <P>
        Without any flow the direction is still found, from temperatures; gpm are then not given. While the plant is off
        nothing is concluded.
      </P>
      <P>
        <b>What it is never.</b> It is no control signal, no set-point, no protection and no measurement. It is worked
        out after the fact, from what the sensors said, and a sensor that nothing else in the plant can contradict is
        believed.
      </P>
      <Caution />
    </Part>
  );
}
