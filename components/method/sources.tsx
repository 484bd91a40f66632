import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { P, Part } from './parts';

/** How far a source stands behind what is done here. */
type Mark = 'values' | 'named' | 'memory';
const MARKS: Readonly<Record<Mark, string>> = {
  values: 'values reproduced',
  named: 'method named',
  memory: 'from memory',
};

interface Source {
  what: string;
  work: string;
  mark: Mark;
}
const SOURCES: readonly Source[] = [
  {
    what: 'water',
    work: 'IAPWS R7-97(2012), Revised Release on the IAPWS Industrial Formulation 1997 for the Thermodynamic Properties of Water and Steam',
    mark: 'values',
  },
  {
    what: 'glycols',
    work: 'A. Melinder, Properties of Secondary Working Fluids for Indirect Systems, IIR, 2010',
    mark: 'values',
  },
  {
    what: 'uncertainty',
    work: 'JCGM 100:2008, Guide to the Expression of Uncertainty in Measurement (clause numbers from memory)',
    mark: 'values',
  },
  {
    what: 'reconciliation',
    work: 'S. Narasimhan, C. Jordache, Data Reconciliation and Gross Error Detection, Gulf, 2000',
    mark: 'values',
  },
  { what: 'reconciliation of acceptance tests', work: 'VDI 2048 Blatt 1, 2000, Annex A', mark: 'values' },
  {
    what: 'regression problems',
    work: 'NIST Statistical Reference Datasets: Norris, Misra1a, DanWood, Rat42',
    mark: 'values',
  },
  {
    what: 'unmeasured streams by projection',
    work: 'C. M. Crowe, Y. A. Garcia Campos, A. Hrymak, Reconciliation of process flow rates by matrix projection, AIChE J. 29 (1983) 881',
    mark: 'named',
  },
  {
    what: 'the measurement most at odds',
    work: 'R. S. H. Mah, A. C. Tamhane, Detection of gross errors in process data, AIChE J. 28 (1982) 828',
    mark: 'named',
  },
  {
    what: 'one odd reading set aside',
    work: 'R. W. Serth, W. A. Heenan, Gross error detection and data reconciliation in steam-metering systems, AIChE J. 32 (1986) 733',
    mark: 'named',
  },
  {
    what: 'ways and errors by turns',
    work: 'A. P. Dempster, N. M. Laird, D. B. Rubin, Maximum likelihood from incomplete data via the EM algorithm, J. R. Stat. Soc. B 39 (1977) 1',
    mark: 'named',
  },
  {
    what: 'covariance by stretches',
    work: 'K.-Y. Liang, S. L. Zeger, Longitudinal data analysis using generalized linear models, Biometrika 73 (1986) 13',
    mark: 'named',
  },
  {
    what: 'least squares',
    work: 'D. W. Marquardt, An algorithm for least-squares estimation of nonlinear parameters, J. SIAM 11 (1963) 431',
    mark: 'named',
  },
  {
    what: 'windows that agree',
    work: 'A. Goldenshluger, A. Nemirovski, On spatially adaptive estimation of nonparametric regression, Math. Methods Stat. 6 (1997) 135',
    mark: 'named',
  },
  {
    what: 'noise from medians',
    work: 'P. J. Rousseeuw, C. Croux, Alternatives to the median absolute deviation, J. Am. Stat. Assoc. 88 (1993) 1273',
    mark: 'named',
  },
  {
    what: 'which sensor next',
    work: 'D. V. Lindley, On a measure of the information provided by an experiment, Ann. Math. Stat. 27 (1956) 986',
    mark: 'named',
  },
  {
    what: 'quantiles of chi-square',
    work: 'E. B. Wilson, M. M. Hilferty, The distribution of chi-square, Proc. Nat. Acad. Sci. 17 (1931) 684',
    mark: 'named',
  },
  {
    what: 'normal distribution',
    work: 'M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions, 1964, 26.2',
    mark: 'named',
  },
  { what: 'class of a resistance thermometer', work: 'IEC 60751', mark: 'memory' },
  {
    what: 'a measured plant',
    work: 'NIST Intelligent Building Agents Laboratory, one-minute data, doi 10.18434/mds2-3058',
    mark: 'values',
  },
  {
    what: 'a simulated decoupler',
    work: 'Modelica Buildings library, reference trajectories of its decoupler examples',
    mark: 'values',
  },
];

/** Where the method comes from, and how far each source was at hand. */
export function Sources() {
  return (
    <Part
      id="sources"
      number={8}
      title="Sources"
      sub="and how far each stands behind what is done"
      beside={
        <Table caption="Sources" dense className="phone:block phone:[&_tbody]:block">
          <thead className="phone:sr-only">
            <tr>
              <HeadCell>for</HeadCell>
              <HeadCell>work</HeadCell>
              <HeadCell>stands behind it</HeadCell>
            </tr>
          </thead>
          <tbody>
            {SOURCES.map(({ what, work, mark }) => (
              <tr
                key={work}
                className="phone:block phone:border-b phone:border-grid phone:py-1.5 phone:[&>*]:block phone:[&>*]:border-0! phone:[&>*]:p-0!"
              >
                <RowHead className="w-[27%] font-semibold! text-pretty phone:w-auto">{what}</RowHead>
                <Cell className="text-pretty">{work}</Cell>
                <Cell className="text-small whitespace-nowrap text-ink-2">{MARKS[mark]}</Cell>
              </tr>
            ))}
          </tbody>
        </Table>
      }
    >
      <P>
        The balances are the first law for a steady, adiabatic junction, in any text on thermodynamics; the weighing is
        generalized least squares and Bayes’ rule, in any text on statistics. Their combination for a decoupler is the
        project’s own.
      </P>
      <P>
        <b>Values reproduced:</b> numbers that the source prints come out of a test of the project. The text itself was
        not always at hand: where its numbers were read in a second place, the table in fixtures/reference names it.
      </P>
      <P>
        <b>Method named:</b> the method is known by this work. It was written down without the text at hand; its
        arithmetic is tested on its own, and its limits and constants are the project’s.
      </P>
      <P>
        <b>From memory:</b> a number that nobody has looked up.
      </P>
      <P>
        Limits of time, temperature and share without a source in this list are common practice of the trade, no source;
        in the code each says so beside itself.
      </P>
    </Part>
  );
}
