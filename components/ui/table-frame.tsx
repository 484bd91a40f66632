'use client';
import { useEffect, useRef, useState, type ReactNode } from 'react';

/** Lets a wide table scroll inside its own frame. Only while it does is the frame a stop for the keyboard. */
export function TableFrame({ label, children }: { label?: string; children: ReactNode }) {
  const frame = useRef<HTMLDivElement>(null);
  const [scrolls, setScrolls] = useState(false);
  useEffect(() => {
    const element = frame.current;
    if (element === null) return;
    const observer = new ResizeObserver(() => setScrolls(element.scrollWidth > element.clientWidth));
    observer.observe(element);
    return () => observer.disconnect();
  }, []);
  return (
    <div
      ref={frame}
      {...(scrolls ? { tabIndex: 0, role: 'region', 'aria-label': label } : {})}
      className="max-w-full overflow-x-auto"
    >
      {children}
    </div>
  );
}
