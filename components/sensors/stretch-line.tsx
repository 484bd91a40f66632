'use client';
import type { Sensor } from '@/lib/schemas/sensors';

/** Narrowest mark, in parts of the line: an hour of a fortnight would be less than a pixel. */
const LEAST = 0.9;
const HEIGHT = 16;
const MIDDLE = HEIGHT / 2;

export interface StretchLineProps {
  stretches: Sensor['stretches'];
  fromMs: number;
  toMs: number;
  /** Starts of the local days, epoch ms. */
  days: readonly number[];
  /** It has no record of its own: a dotted line. */
  never: boolean;
}

/**
 * The period as a line: drawn where values arrived and passed, broken where they are missing; a solid block where they stood
 * still, an open one where they cannot be, an upright stroke for single spikes. Hidden from readers: the words stand beside it.
 */
export function StretchLine({ stretches, fromMs, toMs, days, never }: StretchLineProps) {
  const at = (ms: number) => (100 * (ms - fromMs)) / (toMs - fromMs);
  const box = (stretch: Sensor['stretches'][number]) => {
    const from = at(Date.parse(stretch.from));
    const width = Math.max(LEAST, at(Date.parse(stretch.to)) - from);
    return { x: Math.min(from, 100 - width), width };
  };
  const missing = stretches.filter(({ kind }) => kind === 'missing').map(box);
  const fine = { vectorEffect: 'non-scaling-stroke' } as const;
  return (
    <svg
      width="100%"
      height={HEIGHT}
      viewBox={`0 0 100 ${HEIGHT}`}
      preserveAspectRatio="none"
      aria-hidden="true"
      className="block min-w-24 overflow-visible"
    >
      {days.map((day) => (
        <line key={day} x1={at(day)} x2={at(day)} y1="3" y2={HEIGHT - 3} stroke="var(--grid)" {...fine} />
      ))}
      <line
        x1="0"
        x2="100"
        y1={MIDDLE}
        y2={MIDDLE}
        stroke={never ? 'var(--rule)' : 'var(--ink2)'}
        strokeDasharray={never ? '1 3' : undefined}
        {...fine}
      />
      {missing.map(({ x, width }) => (
        <rect key={x} x={x} width={width} y={MIDDLE - 2} height="4" fill="var(--paper)" />
      ))}
      {stretches.map((stretch) => {
        const { x, width } = box(stretch);
        const key = `${stretch.kind}${stretch.from}`;
        if (stretch.kind === 'stuck') return <rect key={key} x={x} width={width} y="3" height="10" fill="var(--ink)" />;
        if (stretch.kind === 'out-of-range')
          return (
            <rect key={key} x={x} width={width} y="3" height="10" fill="var(--paper)" stroke="var(--ink)" {...fine} />
          );
        if (stretch.kind === 'spike')
          return <line key={key} x1={x} x2={x} y1="2" y2={HEIGHT - 2} stroke="var(--ink)" {...fine} />;
        return null;
      })}
    </svg>
  );
}

/** The same in words. */
export function stretchWords(stretches: Sensor['stretches'], never: boolean): string {
  if (never) return 'no record of its own';
  const totals = new Map<string, number>();
  for (const { kind, from, to } of stretches)
    totals.set(kind, (totals.get(kind) ?? 0) + (Date.parse(to) - Date.parse(from)) / 3_600_000);
  if (totals.size === 0) return 'arrived and passed throughout';
  const length = (hours: number) => (hours < 1 ? `${Math.round(hours * 60)} min` : `${Math.round(hours)} h`);
  return [...totals].map(([kind, hours]) => `${kind.replaceAll('-', ' ')} ${length(hours)}`).join(', ');
}

/** What the marks mean, under the table. */
export function StretchKey() {
  const mark = (children: React.ReactNode, words: string) => (
    <span className="inline-flex items-center gap-2">
      <svg width="18" height="12" aria-hidden="true">
        {children}
      </svg>
      {words}
    </span>
  );
  return (
    <p className="mt-3 flex flex-wrap gap-x-5 gap-y-1 text-small text-ink-2">
      {mark(<line x1="0" x2="18" y1="6" y2="6" stroke="var(--ink2)" />, 'arrived and passed')}
      {mark(<rect x="2" y="1" width="14" height="10" fill="var(--ink)" />, 'stuck')}
      {mark(<rect x="2.5" y="1.5" width="13" height="9" fill="var(--paper)" stroke="var(--ink)" />, 'out of range')}
      {mark(<line x1="9" x2="9" y1="0" y2="12" stroke="var(--ink)" />, 'spike')}
      <span>gap: missing an hour or more</span>
    </p>
  );
}
