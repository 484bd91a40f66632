import { cleanup } from '@testing-library/react';
import { afterEach, vi } from 'vitest';

/** What a browser has and jsdom lacks, as far as the pages ask for it. A width for everything that is measured. */
export const MEASURED_WIDTH_PX = 1000;

class MeasuringObserver implements ResizeObserver {
  constructor(private readonly callback: ResizeObserverCallback) {}
  observe(target: Element): void {
    const contentRect = new DOMRect(0, 0, MEASURED_WIDTH_PX, 300);
    const size = [{ inlineSize: MEASURED_WIDTH_PX, blockSize: 300 }];
    const entry = { target, contentRect, borderBoxSize: size, contentBoxSize: size, devicePixelContentBoxSize: size };
    queueMicrotask(() => this.callback([entry], this));
  }
  unobserve(): void {
    // Nothing is kept.
  }
  disconnect(): void {
    // Nothing is kept.
  }
}

class Rectangle {
  constructor(
    readonly x = 0,
    readonly y = 0,
    readonly width = 0,
    readonly height = 0,
  ) {}
  get left() {
    return this.x;
  }
  get top() {
    return this.y;
  }
  get right() {
    return this.x + this.width;
  }
  get bottom() {
    return this.y + this.height;
  }
}

class Matrix {
  rotate(): this {
    return this;
  }
  scale(): this {
    return this;
  }
}

class Path {
  moveTo(): void {
    // Drawn nowhere.
  }
  lineTo(): void {
    // Drawn nowhere.
  }
  rect(): void {
    // Drawn nowhere.
  }
}

/** Names of what canvases were asked to do, in order, with the paint in force: `fillRect #1b5e7b`. */
export const drawn: string[] = [];

function recordingContext(canvas: HTMLCanvasElement): CanvasRenderingContext2D {
  const state: Record<string, unknown> = { canvas };
  return new Proxy(state, {
    get: (kept, name: string) => {
      if (name in kept) return kept[name];
      if (name === 'createPattern') return () => ({ setTransform: () => undefined, toString: () => 'pattern' });
      return () => {
        if (name === 'fillRect' || name === 'fill') drawn.push(`${name} ${String(kept.fillStyle)}`);
        else if (name === 'stroke' || name === 'strokeRect') drawn.push(`${name} ${String(kept.strokeStyle)}`);
      };
    },
    set: (kept, name: string, value: unknown) => {
      kept[name] = value;
      return true;
    },
  }) as unknown as CanvasRenderingContext2D;
}

/** Media queries that hold; a test of the phone sets `(max-width: 760px)`. */
export const media = new Set<string>();

vi.stubGlobal('ResizeObserver', MeasuringObserver);
vi.stubGlobal('DOMRect', Rectangle);
vi.stubGlobal('DOMMatrix', Matrix);
vi.stubGlobal('Path2D', Path);
vi.stubGlobal('devicePixelRatio', 1);
vi.stubGlobal('matchMedia', (query: string) => ({
  media: query,
  get matches() {
    return media.has(query);
  },
  addEventListener: () => undefined,
  removeEventListener: () => undefined,
  addListener: () => undefined,
  removeListener: () => undefined,
}));
vi.spyOn(HTMLCanvasElement.prototype, 'getContext').mockImplementation(function getContext(this: HTMLCanvasElement) {
  return recordingContext(this);
});
Element.prototype.scrollIntoView = () => undefined;
Element.prototype.hasPointerCapture = () => false;
Element.prototype.setPointerCapture = () => undefined;
Element.prototype.releasePointerCapture = () => undefined;

afterEach(() => {
  cleanup();
  drawn.length = 0;
  media.clear();
  delete document.documentElement.dataset.theme;
});
