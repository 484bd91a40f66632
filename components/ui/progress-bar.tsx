import { formatPercent } from '@/lib/client/format';

/** Work that moves: a bar and its figure. `progress` is 0 to 1. */
export function ProgressBar({ progress, label }: { progress: number; label: string }) {
  const share = Math.min(1, Math.max(0, progress));
  return (
    <span className="inline-flex items-center gap-1.5">
      <span
        role="progressbar"
        aria-label={label}
        aria-valuemin={0}
        aria-valuemax={100}
        aria-valuenow={Math.round(share * 100)}
        className="block h-2.5 w-37.5 border border-ink"
      >
        <span className="block h-full bg-ink" style={{ width: `${share * 100}%` }} />
      </span>
      <span aria-hidden="true" className="font-semibold">
        {formatPercent(share)}&nbsp;%
      </span>
    </span>
  );
}
