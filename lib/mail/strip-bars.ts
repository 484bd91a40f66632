import type { HourBar } from './daily-mail-model';

/** Heights of the strip in pixels: the tallest bars above and below share them on one scale. */
export const STRIP_PIXELS = 96;
/** A bar that is there is seen. */
const LEAST_PIXELS = 2;
/** Height of one line with the mark of reverse flow. */
export const MARK_PIXELS = 12;

export interface StripBar {
  startMs: number;
  kind: HourBar['kind'];
  upPixels: number;
  downPixels: number;
  /** Lines of `/` that the backward part has room for. */
  marks: number;
}

export interface Strip {
  bars: StripBar[];
  /** Room above and below the still line. */
  upPixels: number;
  downPixels: number;
}

/**
 * Bars of the mail's strip: forward above the still line, backward below it, symmetric in gpm per pixel.
 *
 * Units   pixels.
 * Gaps    hours that are still, unknown, off or without data have no bar; the drawing marks them otherwise.
 */
export function stripBars(hours: readonly HourBar[]): Strip {
  const drawn = hours.map((hour) => ({
    ...hour,
    up: hour.kind === 'forward' || hour.kind === 'reverse' ? hour.forwardGpm : 0,
    down: hour.kind === 'forward' || hour.kind === 'reverse' ? hour.reverseGpm : 0,
  }));
  const mostUp = Math.max(0, ...drawn.map((hour) => hour.up));
  const mostDown = Math.max(0, ...drawn.map((hour) => hour.down));
  const perGpm = mostUp + mostDown === 0 ? 0 : STRIP_PIXELS / (mostUp + mostDown);
  const pixels = (gpm: number) => (gpm <= 0 ? 0 : Math.max(LEAST_PIXELS, Math.round(gpm * perGpm)));
  return {
    bars: drawn.map((hour) => ({
      startMs: hour.startMs,
      kind: hour.kind,
      upPixels: pixels(hour.up),
      downPixels: pixels(hour.down),
      marks: Math.floor(pixels(hour.down) / MARK_PIXELS),
    })),
    // The bead of a still hour needs a little room on either side.
    upPixels: Math.max(6, pixels(mostUp)),
    downPixels: Math.max(8, pixels(mostDown)),
  };
}
