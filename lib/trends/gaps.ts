import { durationText, type ProblemLog } from './problems';
import type { StepCounter } from './step';
import { clockText, stampText } from './stamp-text';
import { DAY_MS } from './timestamps';
import type { TimestampPlan } from './types';
import type { LocalClock } from './zone-offsets';

/** Rows further apart than this many usual steps leave a gap. */
const GAP_STEPS = 1.5;

/** The wall time of an instant as the file writes it. */
export class StampWriter {
  constructor(
    private readonly clock: LocalClock,
    private readonly timestamp: TimestampPlan,
  ) {}

  readonly column = (): string => this.timestamp.columns[0] ?? '';

  localMs(utcMs: number): number {
    return utcMs + this.clock.offsetMs(utcMs);
  }

  text(utcMs: number): string {
    return stampText(this.localMs(utcMs), this.timestamp.form);
  }

  /** Without the date when it is that of `afterMs`. */
  shortText(utcMs: number, afterMs: number): string {
    const sameDay = Math.floor(this.localMs(utcMs) / DAY_MS) === Math.floor(this.localMs(afterMs) / DAY_MS);
    return sameDay ? clockText(this.localMs(utcMs)) : this.text(utcMs);
  }
}

/**
 * Reports a gap between two rows that follow each other in time, if there is one. `row` is the later row's; `held` says
 * that a column beside it is logged on change and keeps its value meanwhile.
 */
export function noteGap(
  problems: ProblemLog,
  step: StepCounter,
  stamps: StampWriter,
  fromMs: number,
  toMs: number,
  row: number,
  held = false,
): void {
  if (!step.isRegular || toMs - fromMs <= step.usualMs * GAP_STEPS) return;
  const message = () => {
    const missing = durationText(toMs - fromMs - step.usualMs);
    const change =
      stamps.localMs(toMs) - toMs === stamps.localMs(fromMs) - fromMs ? '' : ' The clocks changed in between.';
    const filled = held ? 'only values logged on change were kept on' : 'nothing was filled in';
    return `${stamps.text(fromMs)} is followed by ${stamps.shortText(toMs, fromMs)}. A gap of ${missing}; ${filled}.${change}`;
  };
  problems.add({ code: 'gap', severity: 'warning', row, column: stamps.column(), message });
}
