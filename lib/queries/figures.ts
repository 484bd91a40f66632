/** Numbers as the API writes them: four decimals, which is below any sensor's doubt; what is not known is null. */
export function figure(value: number | null | undefined): number | null {
  return value === null || value === undefined || !Number.isFinite(value) ? null : Math.round(value * 1e4) / 1e4;
}

/** Mean of what was there; NaN when nothing was. */
export class RunningMean {
  private sum = 0;
  private count = 0;

  add(value: number): void {
    if (Number.isNaN(value)) return;
    this.sum += value;
    this.count += 1;
  }

  get value(): number {
    return this.count > 0 ? this.sum / this.count : Number.NaN;
  }
}
