import type { Direction } from '@/lib/client/words';

/** Flows about the two tees; what is not known is null. */
export interface TeeFlows {
  direction: Direction;
  productionGpm: number | null;
  distributionGpm: number | null;
  /** Signed, forward positive. */
  bypassGpm: number | null;
  bypassLoGpm: number | null;
  bypassHiGpm: number | null;
}

/** Where the drawing stands: outer edges of the bands, and the left wall of the common pipe. */
export interface TeeBox {
  left: number;
  right: number;
  top: number;
  bottom: number;
  pipe: number;
  pxPerGpm: number;
}

export interface Rect {
  x: number;
  y: number;
  width: number;
  height: number;
}
export interface TeeArrow {
  x: number;
  y: number;
  to: 'left' | 'right' | 'up' | 'down';
  /** What it lies on: paper colour on solid, rust on hatch. */
  on: 'solid' | 'hatch';
}
export interface TeeDrawing {
  solid: Rect[];
  hatch: Rect[];
  /** The pipe of an unknown direction, as wide as its interval. */
  dots: Rect | null;
  /** Path data of the pipe's walls and of the bands' walls; the first are broken when the direction could be other. */
  pipeWalls: string;
  bandWalls: string;
  wallsBroken: boolean;
  /** A thin line of paper where solid lies against hatch. */
  seams: string;
  arrows: TeeArrow[];
  bead: Rect | null;
  /** Inner edges, for what stands between the bands. */
  supplyLeft: number;
  supplyRight: number;
  returnLeft: number;
  returnRight: number;
  pipeWidth: number;
  /** Share of the band that the crossing water makes: the blend in the supply, or the dilution in the return; null else. */
  crossingShare: number | null;
}

export const STILL_GAP_PX = 6;
const NOMINAL_PX = 40;
const LEAST_PIPE_PX = 2;
const MOST_DOTS_PX = 150;
/** A pipe thinner than this has no room for its chevron; its walls and the bands say the direction. */
const ARROW_ROOM_PX = 16;
const BEAD = { width: 16, height: 7 };

/** Pixels a gpm so that the larger flow is `thickestPx` thick; nothing known: any scale will do. */
export function teeScale(flows: readonly TeeFlows[], thickestPx: number): number {
  const most = Math.max(0, ...flows.flatMap((one) => [one.productionGpm ?? 0, one.distributionGpm ?? 0]));
  return most > 0 ? thickestPx / most : thickestPx / 1000;
}

/**
 * The drawing of both tees to one scale of flow. Bands meet without loss: what rises in the pipe lies as a stripe of
 * the same width in the band it joins.
 *
 * Units   gpm in, px out (of the box).
 * Gaps    a flow that is not known is taken from the other and the bypass; nothing known: bands of nominal width.
 */
export function teeDrawing(flows: TeeFlows, box: TeeBox): TeeDrawing {
  const { production, distribution } = completeFlows(flows);
  const px = (flowGpm: number) => flowGpm * box.pxPerGpm;
  if (production === null || distribution === null) return straight(flows, box, NOMINAL_PX);
  if (flows.direction === 'still' || flows.direction === 'unknown') {
    return straight(flows, box, px((production + distribution) / 2));
  }
  const bypass = production - distribution;
  if (flows.direction === 'reverse' && bypass < 0) return reverse(flows, box, px(production), px(-bypass));
  if (flows.direction === 'forward' && bypass > 0) return forward(flows, box, px(distribution), px(bypass));
  // Flows that contradict the direction (measured widths, for one): no pipe can be drawn to scale.
  return straight({ ...flows, direction: 'unknown' }, box, px((production + distribution) / 2));
}

function completeFlows({ productionGpm, distributionGpm, bypassGpm }: TeeFlows) {
  if (productionGpm !== null && distributionGpm !== null) {
    return { production: productionGpm, distribution: distributionGpm };
  }
  if (bypassGpm !== null && productionGpm !== null) {
    return { production: productionGpm, distribution: productionGpm - bypassGpm };
  }
  if (bypassGpm !== null && distributionGpm !== null) {
    return { production: distributionGpm + bypassGpm, distribution: distributionGpm };
  }
  return { production: productionGpm ?? distributionGpm, distribution: distributionGpm ?? productionGpm };
}

const crossesZero = (flows: TeeFlows): boolean =>
  flows.bypassLoGpm !== null && flows.bypassHiGpm !== null && flows.bypassLoGpm < 0 && flows.bypassHiGpm > 0;

const rect = (x: number, y: number, toX: number, toY: number): Rect => ({ x, y, width: toX - x, height: toY - y });

const pipeArrow = (pipe: number, wide: number, y: number, to: TeeArrow['to'], on: TeeArrow['on']): TeeArrow[] =>
  wide < ARROW_ROOM_PX ? [] : [{ x: pipe + wide / 2, y, to, on }];

/** Return water rises and joins the supply: solid above, the hatched stripe below it. */
function reverse(flows: TeeFlows, box: TeeBox, through: number, rise: number): TeeDrawing {
  const { left, right, top, bottom, pipe } = box;
  const wide = Math.max(LEAST_PIPE_PX, rise);
  const supplyLeft = top + through;
  const supplyRight = supplyLeft + wide;
  const returnLeft = bottom - through;
  const returnRight = returnLeft - wide;
  const middle = (supplyRight + returnRight) / 2;
  return {
    solid: [rect(left, top, right, supplyLeft)],
    hatch: [
      rect(pipe, supplyLeft, right, supplyRight),
      rect(pipe, supplyRight, pipe + wide, returnRight),
      rect(pipe, returnRight, right, returnLeft),
      rect(left, returnLeft, right, bottom),
    ],
    dots: null,
    pipeWalls: `M${pipe} ${supplyLeft}V${returnLeft}M${pipe + wide} ${supplyRight}V${returnRight}`,
    bandWalls:
      `M${left} ${top}H${right}M${left} ${bottom}H${right}` +
      `M${left} ${supplyLeft}H${pipe}M${left} ${returnLeft}H${pipe}` +
      `M${pipe + wide} ${supplyRight}H${right}M${pipe + wide} ${returnRight}H${right}`,
    wallsBroken: crossesZero(flows),
    seams: `M${pipe} ${supplyLeft}H${right}`,
    arrows: [
      { x: left + 46, y: top + through / 2, to: 'right', on: 'solid' },
      { x: right - 46, y: top + through / 2, to: 'right', on: 'solid' },
      ...pipeArrow(pipe, wide, middle, 'up', 'hatch'),
      { x: left + 46, y: bottom - through / 2, to: 'left', on: 'hatch' },
      { x: right - 46, y: (returnRight + bottom) / 2, to: 'left', on: 'hatch' },
    ],
    bead: null,
    supplyLeft,
    supplyRight,
    returnLeft,
    returnRight,
    pipeWidth: wide,
    crossingShare: rise / (through + rise),
  };
}

/** Production water crosses down and thins the return: the solid stripe lies on the hatch. */
function forward(flows: TeeFlows, box: TeeBox, through: number, fall: number): TeeDrawing {
  const { left, right, top, bottom, pipe } = box;
  const wide = Math.max(LEAST_PIPE_PX, fall);
  const supplyRight = top + through;
  const supplyLeft = supplyRight + wide;
  const returnRight = bottom - through;
  const returnLeft = returnRight - wide;
  const middle = (supplyLeft + returnLeft) / 2;
  return {
    solid: [
      rect(left, top, right, supplyRight),
      rect(left, supplyRight, pipe + wide, supplyLeft),
      rect(pipe, supplyLeft, pipe + wide, returnLeft),
      rect(left, returnLeft, pipe + wide, returnRight),
    ],
    hatch: [rect(left, returnRight, right, bottom)],
    dots: null,
    pipeWalls: `M${pipe} ${supplyLeft}V${returnLeft}M${pipe + wide} ${supplyRight}V${returnRight}`,
    bandWalls:
      `M${left} ${top}H${right}M${left} ${bottom}H${right}` +
      `M${left} ${supplyLeft}H${pipe}M${left} ${returnLeft}H${pipe}` +
      `M${pipe + wide} ${supplyRight}H${right}M${pipe + wide} ${returnRight}H${right}`,
    wallsBroken: crossesZero(flows),
    seams: `M${left} ${returnRight}H${pipe + wide}`,
    arrows: [
      { x: left + 46, y: (top + supplyLeft) / 2, to: 'right', on: 'solid' },
      { x: right - 46, y: top + through / 2, to: 'right', on: 'solid' },
      ...pipeArrow(pipe, wide, middle, 'down', 'solid'),
      { x: left + 46, y: bottom - through / 2, to: 'left', on: 'hatch' },
      { x: right - 46, y: bottom - through / 2, to: 'left', on: 'hatch' },
    ],
    bead: null,
    supplyLeft,
    supplyRight,
    returnLeft,
    returnRight,
    pipeWidth: wide,
    crossingShare: fall / (through + fall),
  };
}

/** Still: an empty gap with a bead. Unknown: a dotted pipe as wide as its interval, no arrow. */
function straight(flows: TeeFlows, box: TeeBox, through: number): TeeDrawing {
  const { left, right, top, bottom, pipe } = box;
  const supply = top + through;
  const back = bottom - through;
  const unknown = flows.direction === 'unknown';
  const span =
    flows.bypassLoGpm === null || flows.bypassHiGpm === null
      ? NOMINAL_PX
      : (flows.bypassHiGpm - flows.bypassLoGpm) * box.pxPerGpm;
  const wide = unknown ? Math.min(MOST_DOTS_PX, Math.max(STILL_GAP_PX, span)) : STILL_GAP_PX;
  const from = unknown ? pipe - wide / 2 : pipe;
  const middle = (supply + back) / 2;
  const centre = from + wide / 2;
  const gap = unknown
    ? ''
    : `M${left} ${supply}H${from}M${from + wide} ${supply}H${right}M${left} ${back}H${from}M${from + wide} ${back}H${right}`;
  return {
    solid: [rect(left, top, right, supply)],
    hatch: [rect(left, back, right, bottom)],
    dots: unknown ? rect(from, supply, from + wide, back) : null,
    pipeWalls: `M${from} ${supply}V${back}M${from + wide} ${supply}V${back}`,
    bandWalls: `M${left} ${top}H${right}M${left} ${bottom}H${right}${unknown ? `M${left} ${supply}H${right}M${left} ${back}H${right}` : gap}`,
    wallsBroken: unknown,
    seams: '',
    arrows: [
      { x: left + 46, y: top + through / 2, to: 'right', on: 'solid' },
      { x: right - 46, y: top + through / 2, to: 'right', on: 'solid' },
      { x: left + 46, y: bottom - through / 2, to: 'left', on: 'hatch' },
      { x: right - 46, y: bottom - through / 2, to: 'left', on: 'hatch' },
    ],
    bead: unknown
      ? null
      : { x: centre - BEAD.width / 2, y: middle - BEAD.height / 2, width: BEAD.width, height: BEAD.height },
    supplyLeft: supply,
    supplyRight: supply,
    returnLeft: back,
    returnRight: back,
    pipeWidth: wide,
    crossingShare: null,
  };
}
