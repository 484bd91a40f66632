import type { Painter } from './plot-canvas';
import { dataRuns, runsOf, type Density, type Span, type TideMark } from './tide-marks';

const STILL_PX = 1.25;
const BEAD_PX = 6;
const FRINGE_PX = 0.8;
const HATCHES = { 3: 'hatch3', 2: 'hatch2', 1: 'hatch1' } as const;

/** The whole strip, in the order of its layers: dots under ink, fringe over ink, the still line over all, beads on it. */
export function drawTide(painter: Painter, marks: readonly TideMark[]): void {
  const seen = marks.filter((mark) => painter.x(mark.endMs) >= 0 && painter.x(mark.startMs) <= painter.widthPx);
  drawUnknown(painter, seen);
  drawBars(painter, seen, 'forward');
  drawBars(painter, seen, 'reverse');
  drawFringe(painter, seen);
  drawStillLine(painter, dataRuns(seen));
  drawBeads(painter, seen);
}

/** Horizontal lines at the axis figures, vertical ones at the columns; days stronger than hours. */
export function drawGrid(
  { context, palette, widthPx, heightPx, x, y }: Painter,
  ticks: readonly number[],
  verticals: readonly { startMs: number; opensDay: boolean }[],
): void {
  context.lineWidth = 1;
  context.strokeStyle = palette.grid;
  for (const tick of ticks) line(context, 0, crisp(y(tick)), widthPx, crisp(y(tick)));
  for (const { startMs, opensDay } of verticals) {
    context.strokeStyle = opensDay ? palette.rule : palette.grid;
    line(context, crisp(x(startMs)), 0, crisp(x(startMs)), heightPx);
  }
}

/** What is being worked on: fenced by two hair-lines, its still line dotted. */
export function drawFence({ context, palette, heightPx, x, y }: Painter, span: Span): void {
  context.strokeStyle = palette.ink;
  context.lineWidth = 1;
  for (const ms of [span.startMs, span.endMs]) line(context, crisp(x(ms)), 0, crisp(x(ms)), heightPx);
  context.setLineDash([2, 4]);
  line(context, x(span.startMs), crisp(y(0)), x(span.endMs), crisp(y(0)));
  context.setLineDash([]);
}

/** A still line with nothing on it: the frame before there are data. */
export function drawEmptyStill({ context, palette, widthPx, y }: Painter): void {
  context.strokeStyle = palette.ink;
  context.lineWidth = STILL_PX;
  line(context, 0, y(0), widthPx, y(0));
}

function drawBars(painter: Painter, marks: readonly TideMark[], side: 'forward' | 'reverse'): void {
  const { context, palette, x, y, ratio } = painter;
  const height = (mark: TideMark) => (side === 'forward' ? mark.forwardGpm : mark.reverseGpm);
  const flat = { 3: palette.fwd, 2: palette.fwd2, 1: palette.fwd1 };
  const colour = side === 'forward' ? palette.fwd : palette.rev;
  const held = marks.filter((mark) => height(mark) !== 0);
  for (const mark of held) {
    // Edges on whole device pixels: neighbours then meet without a seam or an overlap.
    const left = snap(x(mark.startMs), ratio);
    const right = Math.max(left + 1 / ratio, snap(x(mark.endMs), ratio));
    const top = Math.min(y(0), y(height(mark)));
    context.fillStyle = paint(painter, side, mark.density, flat);
    context.fillRect(left, top, right - left, Math.abs(y(height(mark)) - y(0)));
  }
  context.strokeStyle = colour;
  context.lineWidth = side === 'forward' ? 0.8 : 1;
  for (const run of runsOf(held, () => true)) {
    context.beginPath();
    context.moveTo(snap(x(run.startMs), ratio), y(0));
    for (const mark of held) {
      if (mark.index < run.first || mark.index > run.last) continue;
      context.lineTo(snap(x(mark.startMs), ratio), y(height(mark)));
      context.lineTo(snap(x(mark.endMs), ratio), y(height(mark)));
    }
    context.lineTo(snap(x(run.endMs), ratio), y(0));
    context.stroke();
  }
}

const paint = (painter: Painter, side: 'forward' | 'reverse', density: Density, flat: Record<Density, string>) =>
  side === 'forward' ? flat[density] : painter.pattern(HATCHES[density]);

/**
 * The central 90 % interval of each bar: a hair in second ink where there is paper behind it, in paper colour where it
 * cuts back into the bar. A split bar's ends are not the mean, so only what sticks out of it is drawn.
 */
function drawFringe({ context, palette, x, y }: Painter, marks: readonly TideMark[]): void {
  context.lineWidth = FRINGE_PX;
  for (const mark of marks) {
    const { loGpm, hiGpm } = mark;
    if (loGpm === null || hiGpm === null || (mark.direction !== 'forward' && mark.direction !== 'reverse')) continue;
    const middle = (x(mark.startMs) + x(mark.endMs)) / 2;
    const hair = (from: number, to: number, colour: string) => {
      if (to <= from) return;
      context.strokeStyle = colour;
      line(context, middle, y(from), middle, y(to));
    };
    // A bar has no height on its other side: an interval that reaches over the line is drawn there too.
    hair(Math.max(loGpm, mark.forwardGpm), hiGpm, palette.ink2);
    hair(loGpm, Math.min(hiGpm, mark.reverseGpm), palette.ink2);
    if (mark.split) continue;
    hair(Math.max(loGpm, 0), Math.min(hiGpm, mark.forwardGpm), palette.paper);
    hair(Math.max(loGpm, mark.reverseGpm), Math.min(hiGpm, 0), palette.paper);
  }
}

/** Dots from the low to the high bound; without an interval a small dotted block on the line. */
function drawUnknown({ context, palette, x, y, ratio, pattern }: Painter, marks: readonly TideMark[]): void {
  const held = marks.filter((mark) => mark.direction === 'unknown');
  const top = (mark: TideMark) => Math.min(y(0) - BEAD_PX / 2, mark.hiGpm === null ? y(0) : y(mark.hiGpm));
  const bottom = (mark: TideMark) => Math.max(y(0) + BEAD_PX / 2, mark.loGpm === null ? y(0) : y(mark.loGpm));
  context.fillStyle = pattern('dots');
  context.strokeStyle = palette.ink3;
  context.lineWidth = 0.8;
  context.setLineDash([2, 1.5]);
  for (const run of runsOf(held, () => true)) {
    const inside = held.filter((mark) => mark.index >= run.first && mark.index <= run.last);
    context.beginPath();
    for (const mark of inside) {
      context.lineTo(snap(x(mark.startMs), ratio), top(mark));
      context.lineTo(snap(x(mark.endMs), ratio), top(mark));
    }
    for (const mark of inside.toReversed()) {
      context.lineTo(snap(x(mark.endMs), ratio), bottom(mark));
      context.lineTo(snap(x(mark.startMs), ratio), bottom(mark));
    }
    context.closePath();
    context.fill();
    context.stroke();
  }
  context.setLineDash([]);
}

function drawStillLine({ context, palette, x, y }: Painter, runs: readonly Span[]): void {
  context.strokeStyle = palette.ink;
  context.lineWidth = STILL_PX;
  for (const run of runs) line(context, x(run.startMs), y(0), x(run.endMs), y(0));
}

function drawBeads({ context, palette, x, y }: Painter, marks: readonly TideMark[]): void {
  context.fillStyle = palette.paper;
  context.strokeStyle = palette.ink;
  context.lineWidth = 1;
  for (const run of runsOf(marks, (mark) => mark.direction === 'still')) {
    const width = Math.max(BEAD_PX, x(run.endMs) - x(run.startMs));
    const left = crisp((x(run.startMs) + x(run.endMs) - width) / 2);
    const top = y(0) - BEAD_PX / 2;
    context.fillRect(left, top, Math.round(width) - 1, BEAD_PX);
    context.strokeRect(left, top, Math.round(width) - 1, BEAD_PX);
  }
}

/** On whole pixels, rounded as the page rounds its own borders: lines of the plot and of the table under it then meet. */
const crisp = (px: number): number => Math.round(px) + 0.5;
const snap = (px: number, ratio: number): number => Math.round(px * ratio) / ratio;

function line(context: CanvasRenderingContext2D, x0: number, y0: number, x1: number, y1: number): void {
  context.beginPath();
  context.moveTo(x0, y0);
  context.lineTo(x1, y1);
  context.stroke();
}
