import { INK } from '@/components/marks/pattern-defs';
import { formatProbability } from '@/lib/client/format';

/** How sure a guess is, 0 to 1: a short bar and its figure; dotted under one half, where a person has to decide. */
export function ConfidenceBar({ confidence }: { confidence: number }) {
  const share = Math.min(1, Math.max(0, confidence));
  return (
    <span className="inline-flex items-center gap-1 whitespace-nowrap">
      <svg width="45" height="8" aria-hidden="true">
        <line x1="0" x2="45" y1="7.5" y2="7.5" stroke="var(--rule)" />
        <rect width={share * 45} height="7" fill={share < 0.5 ? INK.unknown : 'var(--ink2)'} />
      </svg>
      <span className="text-small">{formatProbability(confidence)}</span>
    </span>
  );
}
