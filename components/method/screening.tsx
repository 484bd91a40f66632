import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { Exhibit, Head, P, Part } from './parts';

const SCREENS = [
  [
    'out of range',
    'colder than 2\u00a0°F below the fluid’s freezing point, warmer than 110\u00a0°F; a flow above 2.5 times design, or below −5\u00a0% of it',
  ],
  [
    'stuck',
    'one value for two hours or more while the plant runs, five times as long as this channel’s usual runs, while other sensors moved; or a main at zero while heat is carried',
  ],
  [
    'spike',
    'one or two readings beyond both neighbours by 4\u00a0°F, or a fifth of design flow (0.3 in the common pipe), and eight times the noise nearby, while no unit comes or goes and no other sensor moves',
  ],
] as const;

const STATES = [
  ['off', 'no unit on, distribution not pumped: nothing is concluded'],
  [
    'starting',
    'the first 15\u00a0minutes after the first unit comes on; up to 60 while supply is over 6\u00a0°F above set-point',
  ],
  ['running', 'the only state that makes low hours, causes, cost and mails'],
  ['coasting', 'no unit on, distribution pumped: the whole flow runs backward, and no fault'],
  ['unknown', 'nothing measured tells'],
] as const;

/** What is left out before anything is estimated, and how the plant's state is told. */
export function Screening() {
  return (
    <Part
      id="screening"
      number={5}
      title="Before any of it"
      sub="what is left out, and when the plant counts as running"
      beside={
        <>
          <Exhibit
            name="Readings that are not used"
            source="Limits are common practice, no source. A verdict on a reading rests on the twelve hours around it."
          >
            <Words caption="Readings that are not used" rows={SCREENS} />
          </Exhibit>
          <Exhibit
            name="Plant states"
            source="Told by the units’ status, else their power, else their flow, else primary flow and temperatures. Limits are common practice, no source."
          >
            <Words caption="Plant states" rows={STATES} />
          </Exhibit>
        </>
      }
    >
      <P>
        Readings that cannot be are taken out before the record is fitted and before any interval is weighed; they then
        count as missing. Nothing is filled in. The Sensors page shows each such stretch.
      </P>
      <P>
        A supply and a return that look exchanged, or values that look like another unit, are pointed out with their
        share of the record, never set right in silence.
      </P>
      <Head>Steady or not</Head>
      <P>
        An interval counts as unsteady within five minutes of staging, in a ramp of over 0.2&nbsp;°F a minute, or while
        a flow changes by a tenth of design. The calibration takes stretches that are steady for at least 60&nbsp;% of
        their readings. Unsteady intervals are estimated all the same, with the wider uncertainty of moving
        temperatures.
      </P>
    </Part>
  );
}

function Words({ caption, rows }: { caption: string; rows: readonly (readonly [string, string])[] }) {
  return (
    <Table caption={caption} bare>
      <thead className="sr-only">
        <tr>
          <HeadCell>word</HeadCell>
          <HeadCell>meaning</HeadCell>
        </tr>
      </thead>
      <tbody>
        {rows.map(([word, meaning]) => (
          <tr key={word}>
            <RowHead className="w-[120px] font-semibold! phone:w-[92px]">{word}</RowHead>
            <Cell className="text-pretty">{meaning}</Cell>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}
