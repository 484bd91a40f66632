'use client';
import { useTimeViewState, type TimeRange, type TimeView } from './time-view';

export interface CursorLineProps {
  view: TimeView;
  /** The stretch this chart shows, where it is not the one in view. */
  range?: TimeRange;
}

/** The page's one cursor on this chart: 1 px of ink at the centre of its bar. */
export function CursorLine({ view, range }: CursorLineProps) {
  const share = useTimeViewState(view, (state) => {
    const { fromMs, toMs } = range ?? state.range;
    return state.cursorMs === null ? -1 : (state.cursorMs - fromMs) / (toMs - fromMs);
  });
  if (share < 0 || share > 1) return null;
  return <div aria-hidden="true" className="chart-cursor" style={{ left: `${share * 100}%` }} />;
}
