'use client';
import { useRef, type PointerEvent } from 'react';
import type { TimeColumn } from './time-columns';
import { useTimeViewState, type TimeView } from './time-view';

export interface TimeHeadsProps {
  columns: readonly TimeColumn[];
  view: TimeView;
  /** Dragging the heads moves the stretch in view. */
  pannable?: boolean;
}

/** The names of the days (or hours, weeks) over a chart, each at the start of its column; the cursor's is bold. */
export function TimeHeads({ columns, view, pannable = false }: TimeHeadsProps) {
  const range = useTimeViewState(view, (state) => state.range);
  const current = useTimeViewState(view, ({ cursorMs }) =>
    cursorMs === null ? -1 : columns.findIndex((column) => cursorMs >= column.startMs && cursorMs < column.endMs),
  );
  const drag = useRef<{ x: number; msPerPx: number } | null>(null);
  const length = range.toMs - range.fromMs;
  const onDown = (event: PointerEvent<HTMLDivElement>) => {
    if (!pannable || range === view.bounds) return;
    drag.current = { x: event.clientX, msPerPx: length / event.currentTarget.clientWidth };
    event.currentTarget.setPointerCapture(event.pointerId);
  };
  const onMove = (event: PointerEvent<HTMLDivElement>) => {
    const held = drag.current;
    if (held === null) return;
    view.pan((held.x - event.clientX) * held.msPerPx);
    held.x = event.clientX;
  };
  const onUp = () => {
    drag.current = null;
  };
  const zoomed = range !== view.bounds;
  return (
    <div
      aria-hidden="true"
      className={`relative h-5 overflow-hidden text-micro text-ink-2 select-none ${pannable && zoomed ? 'cursor-grab touch-none' : ''}`}
      onPointerDown={onDown}
      onPointerMove={onMove}
      onPointerUp={onUp}
      onPointerCancel={onUp}
    >
      {columns.map((column, index) => (
        <span
          key={column.startMs}
          className={`absolute truncate pl-1.5 ${index === current ? 'font-semibold text-ink' : ''}`}
          style={{
            left: `${((column.startMs - range.fromMs) / length) * 100}%`,
            width: `${((column.endMs - column.startMs) / length) * 100}%`,
          }}
        >
          {column.label}
        </span>
      ))}
    </div>
  );
}
