import { MISSING, NO_BREAK_SPACE } from '@/lib/client/format';

export interface FigureProps {
  /** The number as printed (lib/client/format). */
  children: string;
  unit?: string;
  /** `±0.2` or an interval, after it. */
  interval?: string;
  strong?: boolean;
  className?: string;
}

/** A number with its unit beside it, in third ink and joined so that they never part. A missing number has no unit. */
export function Figure({ children, unit, interval, strong = false, className = '' }: FigureProps) {
  const missing = children === MISSING;
  return (
    <span className={`whitespace-nowrap ${strong ? 'font-semibold' : ''} ${className}`}>
      {children}
      {unit === undefined || missing ? null : (
        <span className="text-micro font-normal text-ink-3">
          {NO_BREAK_SPACE}
          {unit}
        </span>
      )}
      {interval === undefined || interval === '' || missing ? null : (
        <span className="text-micro font-normal text-ink-2">
          {NO_BREAK_SPACE}
          {interval}
        </span>
      )}
    </span>
  );
}
