import type { AxisTicks, FlowLine } from './load-flow-scatter';
import type { Painter } from './plot-canvas';
import type { ScatterPoint } from './scatter-points';

export interface ScatterDrawing {
  points: readonly ScatterPoint[];
  expected?: readonly FlowLine[];
  design?: readonly FlowLine[];
  unitFlowsGpm: readonly number[];
  chosen: ScatterPoint | null;
  ticks: AxisTicks;
}

const TICK_PX = 4;

/** Axes, the lines of unit flow, design and expectation, and one mark an hour: dot, slash, ring or open square. */
export function drawScatter(painter: Painter, drawing: ScatterDrawing): void {
  const { context, palette, widthPx, heightPx, x, y } = painter;
  context.strokeStyle = palette.ink;
  context.lineWidth = 1;
  path(painter, [[0.5, 0], [0.5, heightPx - 0.5], [widthPx, heightPx - 0.5]]); // prettier-ignore
  for (const { value } of drawing.ticks.flow) path(painter, [[0, y(value)], [TICK_PX, y(value)]]); // prettier-ignore
  for (const { value } of drawing.ticks.load) path(painter, [[x(value), heightPx], [x(value), heightPx - TICK_PX]]); // prettier-ignore
  context.strokeStyle = palette.ink3;
  context.setLineDash([1, 3]);
  for (const flowGpm of drawing.unitFlowsGpm) path(painter, [[0, y(flowGpm)], [widthPx, y(flowGpm)]]); // prettier-ignore
  context.setLineDash([4, 3]);
  context.strokeStyle = palette.ink2;
  flowLine(painter, drawing.design);
  context.setLineDash([]);
  context.strokeStyle = palette.ink;
  context.lineWidth = 1.75;
  flowLine(painter, drawing.expected);
  for (const point of drawing.points) drawMark(painter, point);
  if (drawing.chosen !== null) {
    context.strokeStyle = palette.ink;
    context.lineWidth = 1;
    ring(painter, drawing.chosen, 8);
  }
}

function drawMark(painter: Painter, point: ScatterPoint): void {
  const { context, palette, x, y } = painter;
  const left = x(point.loadTons);
  const top = y(point.flowGpm);
  if (point.direction === 'forward') {
    context.fillStyle = palette.fwd;
    context.beginPath();
    context.arc(left, top, 1.9, 0, 2 * Math.PI);
    context.fill();
  } else if (point.direction === 'reverse') {
    context.strokeStyle = palette.rev;
    context.lineWidth = 1.9;
    path(painter, [[left - 3.2, top + 3.2], [left + 3.2, top - 3.2]]); // prettier-ignore
  } else if (point.direction === 'still') {
    context.strokeStyle = palette.ink;
    context.lineWidth = 1;
    ring(painter, point, 2.6);
  } else {
    context.strokeStyle = palette.ink3;
    context.lineWidth = 1;
    context.setLineDash([1.5, 1]);
    context.strokeRect(left - 2.5, top - 2.5, 5, 5);
    context.setLineDash([]);
  }
}

function ring({ context, x, y }: Painter, point: ScatterPoint, radiusPx: number): void {
  context.beginPath();
  context.arc(x(point.loadTons), y(point.flowGpm), radiusPx, 0, 2 * Math.PI);
  context.stroke();
}

function flowLine(painter: Painter, line: readonly FlowLine[] | undefined): void {
  if (line === undefined) return;
  path(
    painter,
    line.map(({ loadTons, flowGpm }) => [painter.x(loadTons), painter.y(flowGpm)] as const),
  );
}

function path({ context }: Painter, points: readonly (readonly [number, number])[]): void {
  context.beginPath();
  for (const [left, top] of points) context.lineTo(left, top);
  context.stroke();
}
