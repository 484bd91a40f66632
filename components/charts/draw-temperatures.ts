import type { Painter } from './plot-canvas';
import { stretchesAbove, type TemperatureColumns } from './temperature-columns';

/**
 * Two pairs of lines. Between the supplies hatch, the rise of the blend; between the returns flat tint, the dilution.
 * Solid is the distribution side, broken the production side.
 */
export function drawTemperatures(painter: Painter, columns: TemperatureColumns): void {
  const { palette, pattern } = painter;
  fill(painter, columns.centresMs, columns.distributionSupplyF, columns.productionSupplyF, pattern('hatch2'));
  fill(painter, columns.centresMs, columns.distributionReturnF, columns.productionReturnF, palette.fwd1);
  for (const values of [columns.productionSupplyF, columns.productionReturnF]) {
    trace(painter, columns.centresMs, values, { colour: palette.ink2, widthPx: 1, dash: [3, 2] });
  }
  for (const values of [columns.distributionSupplyF, columns.distributionReturnF]) {
    trace(painter, columns.centresMs, values, { colour: palette.ink, widthPx: 1.5, dash: [] });
  }
}

function fill(
  { context, x, y }: Painter,
  centresMs: readonly number[],
  upper: readonly (number | null)[],
  lower: readonly (number | null)[],
  paint: CanvasPattern | string,
): void {
  context.fillStyle = paint;
  for (const stretch of stretchesAbove(centresMs, upper, lower)) {
    context.beginPath();
    for (const point of stretch) context.lineTo(x(point.x), y(point.upper));
    for (const point of stretch.toReversed()) context.lineTo(x(point.x), y(point.lower));
    context.closePath();
    context.fill();
  }
}

interface Pen {
  colour: string;
  widthPx: number;
  dash: number[];
}

function trace(
  { context, x, y }: Painter,
  centresMs: readonly number[],
  values: readonly (number | null)[],
  { colour, widthPx, dash }: Pen,
): void {
  context.strokeStyle = colour;
  context.lineWidth = widthPx;
  context.lineJoin = 'round';
  context.setLineDash(dash);
  context.beginPath();
  let drawing = false;
  centresMs.forEach((ms, index) => {
    const value = values[index] ?? null;
    if (value === null) {
      drawing = false;
      return;
    }
    if (drawing) context.lineTo(x(ms), y(value));
    else context.moveTo(x(ms), y(value));
    drawing = true;
  });
  context.stroke();
  context.setLineDash([]);
}
