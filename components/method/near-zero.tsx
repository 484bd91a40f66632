import { INK } from '@/components/marks/pattern-defs';
import { formatNumber } from '@/lib/client/format';
import { normalCdf, normalDensity } from '@/lib/hydronics/normal';
import { bypassQuantile } from '@/lib/hydronics/verdict';
import { emptyWayState, type WayState } from '@/lib/hydronics/way-state';

/** An invented interval near balance: each way's bypass before it is held to its sign, gpm. */
const P_REVERSE = 0.3;
const FORWARD: WayState = { ...emptyWayState(), bypassGpm: 70, bypassSigma: 55 };
const REVERSE: WayState = { ...emptyWayState(), bypassGpm: 20, bypassSigma: 45 };

const LEFT_GPM = -160;
const RIGHT_GPM = 220;
const STEP_GPM = 4;
/** As wide as a phone has room for, so that its words never shrink. */
const WIDTH = 344;
const BASE = 132;
const HEIGHT = 170;
const HIGHEST = 108;

const xOf = (gpm: number): number => ((gpm - LEFT_GPM) / (RIGHT_GPM - LEFT_GPM)) * WIDTH;

/** Density of one way's normal, cut off at zero and weighed by the way's probability; `away` is counted from zero. */
function density(away: number, way: WayState, probability: number): number {
  const mass = normalCdf(way.bypassGpm / way.bypassSigma);
  return (probability * normalDensity((away - way.bypassGpm) / way.bypassSigma)) / (way.bypassSigma * mass);
}

const steps = (from: number, to: number): number[] =>
  Array.from({ length: Math.round((to - from) / STEP_GPM) + 1 }, (_, index) => from + index * STEP_GPM);
const reverse = steps(LEFT_GPM, 0).map((gpm) => ({ gpm, p: density(-gpm, REVERSE, P_REVERSE) }));
const forward = steps(0, RIGHT_GPM).map((gpm) => ({ gpm, p: density(gpm, FORWARD, 1 - P_REVERSE) }));
const most = Math.max(...[...reverse, ...forward].map(({ p }) => p));

/** The outline of a density, closed along the base. */
function outline(curve: readonly { gpm: number; p: number }[]): string {
  const points = curve.map(({ gpm, p }) => `${xOf(gpm).toFixed(1)} ${(BASE - (HIGHEST * p) / most).toFixed(1)}`);
  const [first, last] = [curve[0]?.gpm ?? 0, curve.at(-1)?.gpm ?? 0];
  return `M${xOf(first)} ${BASE}L${points.join('L')}L${xOf(last)} ${BASE}Z`;
}

/** The central 90 % interval of a bypass that may run either way: two normals, each cut off at zero. */
export function NearZero() {
  const lo = bypassQuantile(0.05, P_REVERSE, FORWARD, REVERSE);
  const hi = bypassQuantile(0.95, P_REVERSE, FORWARD, REVERSE);
  const [loText, hiText] = [lo, hi].map((gpm) => formatNumber(gpm, { sign: 'always' }));
  return (
    <svg
      role="img"
      aria-label={`Probability over the bypass of an invented interval: reverse 0.30, forward 0.70, 90\u00a0% between ${loText} and ${hiText}\u00a0gpm`}
      viewBox={`0 0 ${WIDTH} ${HEIGHT}`}
      width={WIDTH}
      height={HEIGHT}
      className="block h-auto max-w-full"
    >
      <path d={outline(reverse)} fill={INK.reverse[2]} stroke="var(--rev)" />
      <path d={outline(forward)} fill="var(--fwd)" />
      <line x1="0" x2={WIDTH} y1={BASE} y2={BASE} stroke="var(--ink)" strokeWidth="1.25" />
      <line x1={xOf(0)} x2={xOf(0)} y1="4" y2={BASE + 6} stroke="var(--ink)" />
      <path
        d={`M${xOf(lo)} ${BASE + 8}v10M${xOf(lo)} ${BASE + 13}H${xOf(hi)}M${xOf(hi)} ${BASE + 8}v10`}
        fill="none"
        stroke="var(--ink)"
        strokeWidth="2"
      />
      <g fill="var(--ink)" fontSize="11" textAnchor="middle">
        <text x={xOf(lo)} y={BASE + 32}>
          {loText}
        </text>
        <text x={xOf(0)} y={BASE + 32}>
          0
        </text>
        <text x={xOf(hi)} y={BASE + 32}>
          {hiText}&nbsp;gpm
        </text>
      </g>
      <g fill="var(--ink2)" fontSize="11">
        <text x={xOf(0) - 8} y="13" textAnchor="end">
          reverse, 0.30
        </text>
        <text x={xOf(0) + 8} y="13">
          forward, 0.70
        </text>
      </g>
    </svg>
  );
}
