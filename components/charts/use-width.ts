'use client';
import { useEffect, useState } from 'react';

/**
 * The width an element has, so that an SVG can be drawn in true pixels: stretching one would stretch its hatch. Before
 * the first measure (and on the server) `atFirstPx`.
 */
export function useWidth(atFirstPx: number): [ref: (element: Element | null) => void, widthPx: number] {
  const [element, setElement] = useState<Element | null>(null);
  const [widthPx, setWidthPx] = useState(atFirstPx);
  useEffect(() => {
    if (element === null) return;
    const observer = new ResizeObserver(([entry]) => {
      const width = Math.round(entry?.contentRect.width ?? 0);
      if (width > 0) setWidthPx(width);
    });
    observer.observe(element);
    return () => observer.disconnect();
  }, [element]);
  return [setElement, widthPx];
}
