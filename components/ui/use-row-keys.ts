'use client';
import { useRef, type RefObject } from 'react';
import { useKeys } from './use-keys';

/** `j` and `k` (and `also`) move the focus along the links at the head of a table body's rows; the ref goes on the body. */
export function useRowKeys(
  also: { next: string; previous: string } | null = null,
): RefObject<HTMLTableSectionElement | null> {
  const body = useRef<HTMLTableSectionElement>(null);
  const move = (by: number) => {
    const links = [...(body.current?.querySelectorAll<HTMLAnchorElement>('th a') ?? [])];
    const at = links.findIndex((link) => link === document.activeElement);
    links[Math.min(links.length - 1, Math.max(0, at + by))]?.focus();
  };
  const next = () => move(1);
  const previous = () => move(-1);
  useKeys({ j: next, k: previous, ...(also === null ? {} : { [also.next]: next, [also.previous]: previous }) });
  return body;
}
