'use client';
import { useEffect, useRef, useState } from 'react';

/** Follows a value, but changes at most once in so many ms; the last value always arrives. */
export function useThrottled<Value>(value: Value, everyMs: number): Value {
  const [shown, setShown] = useState(value);
  const changedAt = useRef(Number.NEGATIVE_INFINITY);
  useEffect(() => {
    const wait = Math.max(0, changedAt.current + everyMs - performance.now());
    const timer = setTimeout(() => {
      changedAt.current = performance.now();
      setShown(value);
    }, wait);
    return () => clearTimeout(timer);
  }, [value, everyMs]);
  return shown;
}
