'use client';
import { INK } from '@/components/marks/pattern-defs';
import { useFormat } from '@/components/shell/units-context';
import { squareSide } from './heat-cells';

/** What the squares of the heat calendar stand for; the reference is stated, so that areas can be read. */
export function HeatKey({ referenceGpm, cellPx }: { referenceGpm: number; cellPx: number }) {
  const print = useFormat();
  const steps = [roundTo(referenceGpm * 0.18), roundTo(referenceGpm * 0.45), referenceGpm];
  return (
    <ul className="mt-3.5 flex flex-wrap gap-x-7 gap-y-1.5 text-small text-ink-2">
      <li className="flex items-center gap-2.5">
        <span className="flex items-center gap-1.5" aria-hidden="true">
          {steps.map((excessGpm) => {
            const side = squareSide(excessGpm, referenceGpm, cellPx);
            return (
              <svg key={excessGpm} width={side} height={side}>
                <rect width={side} height={side} fill="var(--fwd)" />
              </svg>
            );
          })}
        </span>
        {steps.map((step) => print.flow(step)).join(', ')} {print.unit('flow')} excess, forward
      </li>
      <li className="flex items-center gap-2.5">
        <svg width="14" height="14" aria-hidden="true">
          <rect x="0.5" y="0.5" width="13" height="13" fill={INK.reverse[2]} stroke="var(--rev)" />
        </svg>
        reverse
      </li>
      <li className="flex items-center gap-2.5">
        <svg width="12" height="12" aria-hidden="true">
          <rect width="12" height="12" fill={INK.unknown} />
        </svg>
        unknown
      </li>
      <li className="flex items-center gap-2.5">
        <svg width="4" height="4" aria-hidden="true">
          <rect x="1" y="1" width="1.4" height="1.4" fill="var(--ink3)" />
        </svg>
        not low
      </li>
      <li>blank: no data</li>
    </ul>
  );
}

/** To one leading figure: 198 is 200, 495 is 500. */
function roundTo(value: number): number {
  const unit = 10 ** Math.floor(Math.log10(value));
  return Math.max(1, Math.round(value / unit)) * unit;
}
