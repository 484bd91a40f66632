'use client';
import { createContext, useContext, useEffect, useState, useSyncExternalStore, type ReactNode } from 'react';

export interface TimeRange {
  fromMs: number;
  toMs: number;
}
export interface TimeViewState {
  range: TimeRange;
  /** Centre of the bar the cursor is on; null: none. */
  cursorMs: number | null;
  /** The cursor stays where it was clicked. */
  pinned: boolean;
}

/** The time that the charts of a page share: what stretch is in view, and where the one cursor stands. */
export interface TimeView {
  readonly bounds: TimeRange;
  get: () => TimeViewState;
  subscribe: (listener: () => void) => () => void;
  /** Follows the pointer or a key; a pinned cursor follows keys only. */
  moveCursor: (epochMs: number | null, by: 'pointer' | 'key') => void;
  /** Holds the cursor at an instant; the same instant again lets it go. */
  pin: (epochMs: number) => void;
  clear: () => void;
  /** Shows a stretch, kept within the bounds and not under `leastMs`; the one before is kept for `back`. */
  zoom: (range: TimeRange, leastMs: number) => void;
  /** Moves the stretch in view without changing its length. */
  pan: (byMs: number) => void;
  back: () => void;
}

export function createTimeView(bounds: TimeRange): TimeView {
  let state: TimeViewState = { range: bounds, cursorMs: null, pinned: false };
  const before: TimeRange[] = [];
  const listeners = new Set<() => void>();
  const set = (patch: Partial<TimeViewState>) => {
    state = { ...state, ...patch };
    for (const listener of listeners) listener();
  };
  const inside = ({ fromMs, toMs }: TimeRange): TimeRange => {
    const length = Math.min(toMs - fromMs, bounds.toMs - bounds.fromMs);
    const start = Math.min(Math.max(fromMs, bounds.fromMs), bounds.toMs - length);
    const whole = start === bounds.fromMs && length === bounds.toMs - bounds.fromMs;
    return whole ? bounds : { fromMs: start, toMs: start + length };
  };
  return {
    bounds,
    get: () => state,
    subscribe: (listener) => {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
    moveCursor: (epochMs, by) => {
      if ((by === 'pointer' && state.pinned) || epochMs === state.cursorMs) return;
      set({ cursorMs: epochMs });
    },
    pin: (epochMs) => {
      const again = state.pinned && state.cursorMs === epochMs;
      set({ cursorMs: epochMs, pinned: !again });
    },
    clear: () => set({ cursorMs: null, pinned: false }),
    zoom: (range, leastMs) => {
      const middle = (range.fromMs + range.toMs) / 2;
      const wide = Math.max(range.toMs - range.fromMs, leastMs);
      const next = inside(
        wide === range.toMs - range.fromMs ? range : { fromMs: middle - wide / 2, toMs: middle + wide / 2 },
      );
      if (next.fromMs === state.range.fromMs && next.toMs === state.range.toMs) return;
      before.push(state.range);
      set({ range: next });
    },
    pan: (byMs) => {
      const next = inside({ fromMs: state.range.fromMs + byMs, toMs: state.range.toMs + byMs });
      if (next.fromMs !== state.range.fromMs) set({ range: next });
    },
    back: () => set({ range: before.pop() ?? bounds }),
  };
}

const TimeViewContext = createContext<TimeView | null>(null);

export interface TimeViewProviderProps extends TimeRange {
  /** Told when the stretch in view changes, to fetch finer bars; `whole` when it is the full period again. */
  onRange?: (range: TimeRange, whole: boolean) => void;
  children: ReactNode;
}

/** Charts inside share range and cursor. A new period starts afresh: give it another `key` or other ends. */
export function TimeViewProvider({ fromMs, toMs, onRange, children }: TimeViewProviderProps) {
  const view = useOwnView({ fromMs, toMs });
  useEffect(() => {
    let shown = view.get().range;
    return view.subscribe(() => {
      const { range } = view.get();
      if (range === shown) return;
      shown = range;
      onRange?.(range, range === view.bounds);
    });
  }, [view, onRange]);
  return <TimeViewContext value={view}>{children}</TimeViewContext>;
}

function useOwnView({ fromMs, toMs }: TimeRange): TimeView {
  const [view, setView] = useState(() => createTimeView({ fromMs, toMs }));
  if (view.bounds.fromMs !== fromMs || view.bounds.toMs !== toMs) {
    const fresh = createTimeView({ fromMs, toMs });
    setView(fresh);
    return fresh;
  }
  return view;
}

/** The shared time, or one of the chart's own where no provider stands above it. */
export function useTimeView(own: TimeRange): TimeView {
  const shared = useContext(TimeViewContext);
  const alone = useOwnView(own);
  return shared ?? alone;
}

/** A part of the state, read so that only its own change draws again. `pick` must return the same object while nothing changed. */
export function useTimeViewState<Part>(view: TimeView, pick: (state: TimeViewState) => Part): Part {
  const read = () => pick(view.get());
  return useSyncExternalStore(view.subscribe, read, read);
}
