import type { Palette } from './palette';

/** The tiles of components/marks/pattern-defs.tsx, for a canvas. */
export type PatternKind = 'hatch3' | 'hatch2' | 'hatch1' | 'dots';

const HATCH: Readonly<Record<Exclude<PatternKind, 'dots'>, { periodPx: number; widthPx: number }>> = {
  hatch3: { periodPx: 4, widthPx: 2.1 },
  hatch2: { periodPx: 4, widthPx: 1.15 },
  hatch1: { periodPx: 6, widthPx: 1 },
};
/** Hatch tiles are drawn larger and turned down, or their slanted edges would be ragged. */
const OVERSAMPLE = 2;

const made = new Map<string, CanvasPattern | null>();

/**
 * A pattern in CSS pixels: the context is expected to be scaled by `ratio`. Made once a kind, colour and pixel ratio, so
 * a change of theme or screen makes its own.
 */
export function canvasPattern(
  context: CanvasRenderingContext2D,
  kind: PatternKind,
  palette: Palette,
  ratio: number,
): CanvasPattern | string {
  const colour = kind === 'dots' ? palette.ink3 : palette.rev;
  const key = `${kind} ${colour} ${ratio}`;
  if (!made.has(key))
    made.set(key, kind === 'dots' ? dots(context, colour, ratio) : hatch(context, kind, colour, ratio));
  return made.get(key) ?? colour;
}

function tile(sizePx: number): { canvas: HTMLCanvasElement; pen: CanvasRenderingContext2D } | null {
  const canvas = document.createElement('canvas');
  canvas.width = sizePx;
  canvas.height = sizePx;
  const pen = canvas.getContext('2d');
  return pen === null ? null : { canvas, pen };
}

function hatch(
  context: CanvasRenderingContext2D,
  kind: Exclude<PatternKind, 'dots'>,
  colour: string,
  ratio: number,
): CanvasPattern | null {
  const { periodPx, widthPx } = HATCH[kind];
  const scale = Math.ceil(ratio) * OVERSAMPLE;
  const made = tile(periodPx * scale);
  if (made === null) return null;
  made.pen.fillStyle = colour;
  made.pen.fillRect(((periodPx - widthPx) / 2) * scale, 0, widthPx * scale, periodPx * scale);
  const pattern = context.createPattern(made.canvas, 'repeat');
  pattern?.setTransform(new DOMMatrix().rotate(45).scale(1 / scale));
  return pattern;
}

function dots(context: CanvasRenderingContext2D, colour: string, ratio: number): CanvasPattern | null {
  const scale = Math.max(1, Math.round(ratio));
  const made = tile(4 * scale);
  if (made === null) return null;
  made.pen.fillStyle = colour;
  made.pen.fillRect(0, 0, scale, scale);
  made.pen.fillRect(2 * scale, 2 * scale, scale, scale);
  const pattern = context.createPattern(made.canvas, 'repeat');
  pattern?.setTransform(new DOMMatrix().scale(1 / scale));
  return pattern;
}
