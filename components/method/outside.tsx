import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { P, Part } from './parts';

interface Check {
  name: string;
  shows: string;
  test: string;
}

const CHECKS: readonly Check[] = [
  {
    name: 'Water, IAPWS-IF97',
    shows: 'density, specific heat and enthalpy within 1 in 10,000 of the release over 0 to 30 °C',
    test: 'water',
  },
  {
    name: 'Glycols, Melinder 2010',
    shows: 'density, specific heat and freezing points to the last printed digit',
    test: 'glycol',
  },
  {
    name: 'Worked examples of the trade',
    shows: 'both tees of published decoupler examples within 0.05\u00a0°F and 1\u00a0gpm',
    test: 'tees',
  },
  {
    name: 'GUM (JCGM 100:2008), H.1 to H.3',
    shows: 'the guide’s uncertainties, correlated inputs included; taken as uncorrelated, the same inputs miss them',
    test: 'gum',
  },
  {
    name: 'NIST StRD: Norris, Misra1a, DanWood, Rat42',
    shows: 'the certified values of the regression problems to nine digits, from both starts',
    test: 'strd',
  },
  {
    name: 'VDI 2048, Annex A, and worked problems of reconciliation',
    shows: 'published flows, half-widths and local tests; the gross error of the first pass is found',
    test: 'reconciliation',
  },
  {
    name: 'A laboratory plant measured by NIST, five days of one-minute data',
    shows:
      'without being told: the 0.49\u00a0°F between its supply sensors, within 0.15, and that its flow meters disagree; over 97\u00a0% of the minutes of deficit by flow difference called reverse, none forward; from temperatures alone under 3\u00a0% of clear surplus called reverse',
    test: 'measured-plant',
  },
  {
    name: 'A simulated decoupler (Modelica Buildings library)',
    shows:
      'of 44 points in surplus none called reverse, of 8 in deficit none forward; at steady points the return tee balances with the true bypass to 0.5\u00a0%',
    test: 'simulated-decoupler',
  },
];

/** What stands outside the project and was compared with, and what the interval's own arithmetic is held against. */
export function Outside() {
  return (
    <Part
      id="outside"
      number={7}
      title="Held against the outside"
      sub="published values and open data"
      beside={<OutsideTable />}
    >
      <P>
        Each of these is a test of the project and runs with every change; the tables behind them say where their
        numbers were read. The two that read open data say so plainly where the data are not beside the project.
      </P>
      <P>
        <b>What runs in the product.</b> Fluid properties and the fit of the whole record stand on the routines tested
        here. The general routines that reproduce the GUM and VDI 2048 do not run in it: the interval’s own arithmetic
        is written for speed, and is held against them. In clear flow it agrees with the general reconciliation within
        0.15 standard uncertainties (tests/hydronics/weigh-slot.test.ts). Its likelihoods are compared with sums by
        brute force (way-fit.test.ts), its slopes with differences (way-score.test.ts), and its intervals with how often
        they hold what was drawn.
      </P>
      <P>
        <b>The laboratory plant.</b> One-minute data of five days, 30&nbsp;% propylene glycol, two chillers. Nothing
        tells the estimator that the secondary supply sensor sits behind the pump and reads 0.49&nbsp;°F above the
        primary one, nor that the meters agree at some 2&nbsp;gpm of 22 rather than at nought. It finds both. The
        yardstick for direction is the difference of those meters, so that close to balance nobody knows who is right,
        and only clear minutes are counted.
      </P>
    </Part>
  );
}

function OutsideTable() {
  return (
    <Table caption="Checks against the outside" className="phone:block phone:[&_tbody]:block">
      <thead className="phone:sr-only">
        <tr>
          <HeadCell>compared with</HeadCell>
          <HeadCell>what is shown</HeadCell>
          <HeadCell>test</HeadCell>
        </tr>
      </thead>
      <tbody>
        {CHECKS.map(({ name, shows, test }) => (
          <tr
            key={name}
            className="phone:block phone:border-b phone:border-grid phone:py-1.5 phone:[&>*]:block phone:[&>*]:border-0! phone:[&>*]:p-0!"
          >
            <RowHead className="w-[30%] font-semibold! text-pretty phone:w-auto">{name}</RowHead>
            <Cell className="text-pretty">{shows}</Cell>
            <Cell className="text-small whitespace-nowrap text-ink-2">tests/reference/{test}.test.ts</Cell>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}
