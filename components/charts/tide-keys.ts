import type { KeyboardEvent } from 'react';
import type { TimeView } from './time-view';
import { markAt, reverseStarts, type TideMark } from './tide-marks';

export interface TideKeyContext {
  view: TimeView;
  marks: readonly TideMark[];
  /** Shortest stretch that zooming may show. */
  leastMs: number;
  onOpen: () => void;
  onToggleTable: () => void;
}

const DAY_MS = 86_400_000;
const centre = (mark: TideMark): number => (mark.startMs + mark.endMs) / 2;

/** What a key does on the strip; false when the key is not one of its own. */
export function tideKey(event: Pick<KeyboardEvent, 'key' | 'shiftKey'>, context: TideKeyContext): boolean {
  const { view, marks } = context;
  const { cursorMs, range } = view.get();
  const here = cursorMs === null ? null : nearest(marks, cursorMs);
  const to = (mark: TideMark | undefined | null) => {
    if (!mark) return;
    view.moveCursor(centre(mark), 'key');
    follow(view, centre(mark), context.leastMs);
  };
  const step = (by: 1 | -1) => {
    if (here === null) {
      to(by > 0 ? firstIn(marks, range.fromMs) : lastIn(marks, range.toMs));
      return;
    }
    const next = event.shiftKey ? nearest(marks, centre(here) + by * DAY_MS) : marks[here.index + by];
    to(next ?? here);
  };
  switch (event.key) {
    case 'ArrowLeft':
      step(-1);
      return true;
    case 'ArrowRight':
      step(1);
      return true;
    case 'Home':
      to(firstIn(marks, range.fromMs));
      return true;
    case 'End':
      to(lastIn(marks, range.toMs));
      return true;
    case '+':
    case '=':
      zoomAt(view, cursorMs, 0.5, context.leastMs);
      return true;
    case '-':
    case '−':
      zoomAt(view, cursorMs, 2, context.leastMs);
      return true;
    case 'n':
      to(reverseStarts(marks).find((mark) => here === null || mark.startMs > here.startMs));
      return true;
    case 'p':
      to(reverseStarts(marks).findLast((mark) => here === null || mark.startMs < here.startMs));
      return true;
    case 'Enter':
      context.onOpen();
      return true;
    case 't':
      context.onToggleTable();
      return true;
    case 'Escape':
      if (view.get().pinned) view.clear();
      else if (range !== view.bounds) view.back();
      else return false;
      return true;
    default:
      return false;
  }
}

/** Shortens or lengthens the stretch in view around an instant, which keeps its place; without one around the middle. */
export function zoomAt(view: TimeView, atMs: number | null, factor: number, leastMs: number): void {
  const { fromMs, toMs } = view.get().range;
  const at = atMs !== null && atMs >= fromMs && atMs <= toMs ? atMs : (fromMs + toMs) / 2;
  view.zoom({ fromMs: at - (at - fromMs) * factor, toMs: at + (toMs - at) * factor }, leastMs);
}

/** Brings the cursor back into view when a key took it out. */
function follow(view: TimeView, atMs: number, leastMs: number): void {
  const { fromMs, toMs } = view.get().range;
  if (atMs < fromMs) view.pan(atMs - fromMs - leastMs / 4);
  else if (atMs > toMs) view.pan(atMs - toMs + leastMs / 4);
}

const firstIn = (marks: readonly TideMark[], fromMs: number) => marks.find((mark) => mark.endMs > fromMs);
const lastIn = (marks: readonly TideMark[], toMs: number) => marks.findLast((mark) => mark.startMs < toMs);

function nearest(marks: readonly TideMark[], epochMs: number): TideMark | null {
  const inside = markAt(marks, epochMs);
  if (inside !== null) return inside;
  return (epochMs < (marks[0]?.startMs ?? 0) ? marks[0] : marks.findLast((mark) => mark.startMs <= epochMs)) ?? null;
}
