import { detached, quoted, type ProblemLog } from './problems';
import { statusMeaning, type StatusMeaning } from './status-words';

/** Different statuses remembered: a file has a handful. */
const MOST_REMEMBERED = 256;

/** Reads the status beside each reading, and counts the readings it voids. */
export class StatusReader {
  private readonly meanings = new Map<string, StatusMeaning>();

  constructor(
    private readonly column: string,
    private readonly cell: number,
    private readonly problems: ProblemLog,
  ) {}

  /** Whether a row's reading counts. */
  accepts(cells: readonly string[], row: number): boolean {
    const status = cells[this.cell] ?? '';
    const meaning = this.meaningOf(status);
    if (meaning === 'good' || meaning === 'unknown') return true;
    const ends = meaning === 'ends';
    const message = () =>
      ends
        ? `The log says ${quoted(status)}: nothing was logged from here on. What was held ends.`
        : `The reading's status is ${quoted(status)}. Read as missing.`;
    const code = ends ? 'log-ended' : 'bad-quality';
    this.problems.add({ code, severity: 'warning', row, column: this.column, detail: status.trim(), message });
    return false;
  }

  private meaningOf(status: string): StatusMeaning {
    let meaning = this.meanings.get(status);
    if (meaning === undefined) {
      meaning = statusMeaning(status);
      if (this.meanings.size < MOST_REMEMBERED) this.meanings.set(detached(status), meaning);
    }
    return meaning;
  }
}
