import { diagonalCovariance, reconcile } from './reconcile';
import type { Constraints, Reconciliation } from './reconcile';

/** Order of the decoupler's quantities in every array of this file. Flows gpm, temperatures F; bypass flow positive forward. */
export const DECOUPLER_VARIABLES = [
  'primaryFlow',
  'secondaryFlow',
  'bypassFlow',
  'primarySupply',
  'secondarySupply',
  'primaryReturn',
  'secondaryReturn',
  'bypassTemp',
] as const;
export type DecouplerVariable = (typeof DECOUPLER_VARIABLES)[number];
/** Forward: supply to return through the common pipe (surplus); reverse: return to supply (deficit). */
export type DecouplerWay = 'forward' | 'reverse';

const N = DECOUPLER_VARIABLES.length;
const [FP, FS, B, TPS, TSS, TPR, TSR, TB] = [0, 1, 2, 3, 4, 5, 6, 7] as const;
/** Constraints of one way. */
export const DECOUPLER_CONSTRAINT_COUNT = 4;

/** Two ways whose chi-squares differ by less are not told apart. */
const SAME = 1e-9;
/** Where nothing is measured: an ordinary chilled-water loop, and a fifth of the flow in the common pipe. */
const USUAL_SUPPLY_F = 44;
const USUAL_RISE_F = 10;
const USUAL_SHARE = 0.2;

/**
 * Both tees of a decoupler that runs one way, with constant density and specific heat:
 *   either:   Fp - Fs - b = 0
 *   forward:  Tss = Tps;  Tb = Tps;  Fp (Tpr - Tps) = Fs (Tsr - Tps)
 *   reverse:  Tpr = Tsr;  Tb = Tsr;  Fs (Tss - Tsr) = Fp (Tps - Tsr)
 * The heat balances are written without b, so that they keep their digits where b is small.
 *
 * Shapes  x: DECOUPLER_VARIABLES; 4 constraints. Units: gpm, F (or a scale on which the fluid mixes exactly).
 * Source  first law for a steady adiabatic junction; constant specific heat shifts a mixed temperature by under 0.025 F.
 */
export function decouplerConstraints(way: DecouplerWay): Constraints {
  // The stream that fills the common pipe, the tee that only passes it on, and the tee that mixes it.
  const [source, passed] = way === 'forward' ? [TPS, TSS] : [TSR, TPR];
  const [mainFlow, mixed, otherFlow, other] = way === 'forward' ? [FP, TPR, FS, TSR] : [FS, TSS, FP, TPS];
  return (x, residual, jacobian) => {
    const at = (index: number) => x[index] as number;
    residual[0] = at(FP) - at(FS) - at(B);
    jacobian.set([1, -1, -1], 0);
    residual[1] = at(passed) - at(source);
    jacobian[N + passed] = 1;
    jacobian[N + source] = -1;
    residual[2] = at(TB) - at(source);
    jacobian[2 * N + TB] = 1;
    jacobian[2 * N + source] = -1;
    residual[3] = at(mainFlow) * (at(mixed) - at(source)) - at(otherFlow) * (at(other) - at(source));
    jacobian[3 * N + mainFlow] = at(mixed) - at(source);
    jacobian[3 * N + otherFlow] = at(source) - at(other);
    jacobian[3 * N + mixed] = at(mainFlow);
    jacobian[3 * N + other] = -at(otherFlow);
    jacobian[3 * N + source] = at(otherFlow) - at(mainFlow);
  };
}

export interface WayReconciliation extends Reconciliation {
  /** True when the measurements pull across and the way ends at no flow in the common pipe. */
  atZeroFlow: boolean;
}

export interface DecouplerReconciliation {
  /** The way with the lower chi-square; `either` when they do not differ. */
  way: DecouplerWay | 'either';
  /** The reconciliation of that way (forward for `either`). */
  best: WayReconciliation;
  forward: WayReconciliation;
  reverse: WayReconciliation;
  /** True when no flow is measured: flows are then counted in shares of the primary flow, which is 1. */
  relativeFlows: boolean;
}

const first = (...values: (number | undefined)[]): number =>
  values.find((value) => Number.isFinite(value)) ?? Number.NaN;

/** A share of the main stream, kept away from the ends where an iteration would leave the model. */
const usableShare = (share: number): number =>
  Number.isFinite(share) ? Math.min(0.9, Math.max(0.02, share)) : USUAL_SHARE;

/** Values to start from: what is measured, and for the rest what the way makes of it. */
function startOf(measured: Float64Array, way: DecouplerWay): Float64Array {
  const known = (index: number) => measured[index];
  const forward = way === 'forward';
  const supply = first(known(TPS), known(TSS), forward ? known(TB) : undefined, USUAL_SUPPLY_F);
  const back = first(known(TSR), known(TPR), forward ? undefined : known(TB), supply + USUAL_RISE_F);
  const secondarySupply = first(known(TSS), supply);
  const primaryReturn = first(known(TPR), back);
  const away = forward ? back - primaryReturn : secondarySupply - supply;
  const share = usableShare(away / (back - supply));
  const [primary, secondary, bypass] = [first(known(FP)), first(known(FS)), first(known(B))];
  // Of the main flow (the larger one) `share` goes through the common pipe.
  const size = Math.abs(bypass);
  const main = first(forward ? primary : secondary, (forward ? secondary : primary) / (1 - share), size / share, 1);
  const lesser = first(forward ? secondary : primary, main - first(size, share * main));
  const [startPrimary, startSecondary] = forward ? [main, lesser] : [lesser, main];
  const start = new Float64Array(N);
  start.set([startPrimary, startSecondary, first(bypass, startPrimary - startSecondary)]);
  start.set([supply, secondarySupply, primaryReturn, back, first(known(TB), forward ? supply : back)], TPS);
  return start;
}

/** Adds constraints that set one quantity each. */
function withFixed(constraints: Constraints, fixed: readonly { index: number; value: number }[]): Constraints {
  return (x, residual, jacobian) => {
    constraints(x, residual, jacobian);
    fixed.forEach(({ index, value }, extra) => {
      const row = DECOUPLER_CONSTRAINT_COUNT + extra;
      residual[row] = (x[index] as number) - value;
      jacobian[row * N + index] = 1;
    });
  };
}

/** One way, kept on its side of zero flow. */
function reconcileWay(
  measured: Float64Array,
  covariance: Float64Array,
  way: DecouplerWay,
  relativeFlows: boolean,
  floorShare: number,
): WayReconciliation {
  const start = startOf(measured, way);
  const flow = Math.max(Math.abs(start[FP] as number), Math.abs(start[FS] as number)) || 1;
  const scale = Float64Array.from(DECOUPLER_VARIABLES, (_, index) => (index <= B ? flow : 1));
  const solve = (fixed: readonly { index: number; value: number }[]) =>
    reconcile(
      {
        measured,
        covariance,
        constraintCount: DECOUPLER_CONSTRAINT_COUNT + fixed.length,
        constraints: withFixed(decouplerConstraints(way), fixed),
        start,
        scale,
      },
      { floorShare },
    );
  const gauge = relativeFlows ? [{ index: FP, value: 1 }] : [];
  const free = solve(gauge);
  const bypass = free.x[B] as number;
  const crossed = way === 'forward' ? bypass < 0 : bypass > 0;
  if (!crossed && free.converged) return { ...free, atZeroFlow: false };
  const atZero = solve([...gauge, { index: B, value: 0 }]);
  return { ...atZero, atZeroFlow: true };
}

/**
 * One interval of a decoupler (or means of an hour) reconciled both ways; the ways meet at zero flow, and the one with the
 * lower chi-square is kept. A way that the measurements pull across zero is held there, which adds a degree of freedom.
 * Made to be shown: its parts say which measurement speaks against which.
 *
 * Shapes  measured, sigmas: DECOUPLER_VARIABLES; `covariance`: 8 x 8 row-major in place of the sigmas' squares.
 * Units   gpm, F; bypass flow signed, positive forward.
 * Gaps    NaN: not measured; so is a value whose sigma is not above zero. Nothing measured: no temperatures, `either`.
 * Throws  RangeError when an array has the wrong length.
 * Source  as reconcile; the tees: decouplerConstraints.
 */
export function reconcileDecoupler(
  measured: Float64Array,
  sigmas: Float64Array,
  options: { covariance?: Float64Array; floorShare?: number } = {},
): DecouplerReconciliation {
  if (measured.length !== N || sigmas.length !== N) {
    throw new RangeError(
      `reconcileDecoupler: needs ${N} values and sigmas, got ${measured.length} and ${sigmas.length}`,
    );
  }
  const usable = measured.map((value, index) => {
    const sigma = sigmas[index] as number;
    return Number.isFinite(value) && sigma > 0 && sigma < Infinity ? value : Number.NaN;
  });
  const covariance = options.covariance ?? diagonalCovariance(sigmas);
  const relativeFlows = [FP, FS, B].every((index) => Number.isNaN(usable[index]));
  const solve = (way: DecouplerWay) => reconcileWay(usable, covariance, way, relativeFlows, options.floorShare ?? 0);
  const forward = solve('forward');
  const reverse = solve('reverse');
  const gap = chiSquareOf(forward) - chiSquareOf(reverse);
  const way = Math.abs(gap) <= SAME || Number.isNaN(gap) ? 'either' : gap < 0 ? 'forward' : 'reverse';
  return { way, best: way === 'reverse' ? reverse : forward, forward, reverse, relativeFlows };
}

/** A way that has no solution loses to any other. */
const chiSquareOf = ({ chiSquare, converged }: Reconciliation): number =>
  converged && Number.isFinite(chiSquare) ? chiSquare : Number.MAX_VALUE;
