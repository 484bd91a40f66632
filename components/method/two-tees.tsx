import { teeScale, type TeeFlows } from '@/components/tees/tee-geometry';
import { TeeSmall } from '@/components/tees/tee-small';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { formatNumber, formatPercent } from '@/lib/client/format';
import { fractionUncertainty, reverseFraction } from '@/lib/hydronics/tees';
import { Exhibit, F, Formulas, Head, P, Part, T } from './parts';

const FORWARD: TeeFlows = {
  direction: 'forward',
  productionGpm: 2000,
  distributionGpm: 1500,
  bypassGpm: 500,
  bypassLoGpm: 500,
  bypassHiGpm: 500,
};
const REVERSE: TeeFlows = {
  direction: 'reverse',
  productionGpm: 1000,
  distributionGpm: 1200,
  bypassGpm: -200,
  bypassLoGpm: -200,
  bypassHiGpm: -200,
};

const SIGMAS_F = [0.1, 0.25, 0.5] as const;
const SPANS_F = [4, 6, 8, 10, 12, 16] as const;
/** Two standard uncertainties of a share that is zero. */
const leastShare = (sigmaF: number, spanF: number): number => 2 * fractionUncertainty(0, spanF, sigmaF, sigmaF, sigmaF);

const EXAMPLE_SIGMA_F = 0.25;
const example = reverseFraction(44, 56, 46);
const exampleSigma = fractionUncertainty(example, 12, EXAMPLE_SIGMA_F, EXAMPLE_SIGMA_F, EXAMPLE_SIGMA_F);
/** 1,000 and 1,020 gpm, each to 2 % (k = 1): the difference over its uncertainty. */
const meterSigmas = 20 / Math.hypot(0.02 * 1000, 0.02 * 1020);

/** The balances at both tees, the textbook formula, and why it does not settle the matter. */
export function TwoTees() {
  return (
    <Part
      id="tees"
      number={2}
      title="Two tees and a pipe"
      sub="what the balances say, and what the textbook makes of them"
      beside={<Beside />}
    >
      <P>
        Between the production side (primary, p) and the distribution side (secondary, s) lie two tees joined by the
        common pipe. Steady water, adiabatic mixing, no storage: mass and energy balance at each tee. The bypass is the
        difference of the mains,
      </P>
      <Formulas>
        <span>
          b = <F at="p" /> − <F at="s" />, positive from supply to return
        </span>
      </Formulas>
      <Head>Forward, b above zero: surplus</Head>
      <Formulas>
        <span>
          <T at="ss" /> = <T at="ps" /> <span className="text-ink-2">(one stream passes the supply tee)</span>
        </span>
        <span>
          <F at="p" /> <T at="pr" /> = <F at="s" /> <T at="sr" /> + b <T at="ps" />{' '}
          <span className="text-ink-2">(the return tee mixes)</span>
        </span>
      </Formulas>
      <Head>Reverse, b below zero: deficit</Head>
      <Formulas>
        <span>
          <T at="pr" /> = <T at="sr" /> <span className="text-ink-2">(one stream passes the return tee)</span>
        </span>
        <span>
          <F at="s" /> <T at="ss" /> = <F at="p" /> <T at="ps" /> + |b| <T at="sr" />{' '}
          <span className="text-ink-2">(the supply tee mixes)</span>
        </span>
      </Formulas>
      <P>
        Whichever way it runs, load equals production over both tees: <F at="p" /> (<T at="pr" /> − <T at="ps" />) ={' '}
        <F at="s" /> (<T at="sr" /> − <T at="ss" />
        ). The two ways meet at b = 0, where neither tee mixes.
      </P>
      <P>
        Mixing is counted in enthalpy, on a scale of temperature that follows the fluid’s specific heat (within
        0.003&nbsp;°F, 15&nbsp;°F from its middle). Flows are taken at one density: their volume differs by less than
        0.07&nbsp;% between the tees.
      </P>
      <Head>The textbook formula</Head>
      <P>
        With meters in both mains the bypass is their difference. Without, temperatures give a share: of the secondary
        flow in reverse, of the primary flow in forward, whichever is the larger.
      </P>
      <Formulas>
        <span>
          reverse share = (<T at="ss" /> − <T at="ps" />) / (<T at="sr" /> − <T at="ps" />)
        </span>
        <span>
          forward share = (<T at="sr" /> − <T at="pr" />) / (<T at="sr" /> − <T at="ps" />)
        </span>
        <span>
          u(share) = u/D times the root of 1 + share² + (1 − share)², with D = <T at="sr" /> − <T at="ps" />
        </span>
      </Formulas>
      <P>
        An error that all sensors share cancels in it; one that they do not share does not. With{' '}
        {formatNumber(EXAMPLE_SIGMA_F, { decimals: 2 })}&nbsp;°F on each sensor, 44, 46 and 56&nbsp;°F make a share of{' '}
        {formatPercent(example, 1)} ± {formatPercent(exampleSigma, 1)}&nbsp;%.
      </P>
      <Head>Why a second look is needed</Head>
      <P>
        The formula always has a sign. The larger of two noisy shares is one or the other in every interval, also when
        the pipe stands still. An error of one sensor is taken for flow, all day and every day, and no average takes it
        away: half a degree between two supply sensors is 4&nbsp;% of the flow at a delta-T of 12&nbsp;°F. Meters fare
        no better: 1,000 and 1,020&nbsp;gpm, each good to 2&nbsp;%, differ by{' '}
        {formatNumber(meterSigmas, { decimals: 1 })} standard uncertainties. And a mean over an interval in which water
        ran one way and then the other is a mean of two streams that were never there together.
      </P>
    </Part>
  );
}

function Beside() {
  const scale = teeScale([FORWARD, REVERSE], 30);
  return (
    <>
      <Exhibit name="Both ways, drawn to one scale of flow: supply above, return below, production at the left">
        <div className="grid max-w-[620px] grid-cols-2 gap-8 phone:grid-cols-1">
          <Drawn
            flows={FORWARD}
            scale={scale}
            title="Forward"
            words="2,000&nbsp;gpm made at 44&nbsp;°F, 1,500 sent out: 500 cross over to the return; 56&nbsp;°F becomes 53."
          />
          <Drawn
            flows={REVERSE}
            scale={scale}
            title="Reverse"
            words="1,000&nbsp;gpm made at 44&nbsp;°F, 1,200 sent out: 200 come back into the supply; 44&nbsp;°F becomes 46."
          />
        </div>
      </Exhibit>
      <Exhibit
        name="Smallest share that temperatures tell from zero at two standard uncertainties, % of the main flow"
        source={
          <>
            2 u/D times the root of 2, for independent sensors of standard uncertainty u. Checked in
            tests/reference/mixing.test.ts.
          </>
        }
      >
        <Table caption="Smallest share that temperatures tell from zero" className="max-w-[620px]" bare>
          <thead>
            <tr>
              <HeadCell>u of each sensor, by D</HeadCell>
              {SPANS_F.map((spanF) => (
                <HeadCell key={spanF} numeric>
                  {spanF}&nbsp;°F
                </HeadCell>
              ))}
            </tr>
          </thead>
          <tbody>
            {SIGMAS_F.map((sigmaF) => (
              <tr key={sigmaF}>
                <RowHead>{formatNumber(sigmaF, { decimals: 2 })}&nbsp;°F</RowHead>
                {SPANS_F.map((spanF) => (
                  <Cell key={spanF} numeric>
                    {formatPercent(leastShare(sigmaF, spanF), 1)}
                  </Cell>
                ))}
              </tr>
            ))}
          </tbody>
        </Table>
      </Exhibit>
    </>
  );
}

function Drawn({ flows, scale, title, words }: { flows: TeeFlows; scale: number; title: string; words: string }) {
  return (
    <figure>
      <TeeSmall flows={flows} pxPerGpm={scale} width={290} height={130} label={`${title}: ${words}`} />
      <figcaption className="mt-2 text-pretty">
        <b>{title}.</b> {words}
      </figcaption>
    </figure>
  );
}
