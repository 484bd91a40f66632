import type { TrendProblem } from '../trends/types';

/** Names that are listed of one kind; the rest is counted. */
const MOST_NAMED = 3;

/** Why a member was passed over, as the end of a sentence. */
export const SKIPPED = {
  system: 'left there by an operating system',
  name: 'by its name no trend log',
  link: 'a link to another file',
  empty: 'empty',
  hidden: 'a hidden sheet',
  short: 'a sheet with fewer than two rows',
} as const;

/** What of a container was not read, told by kind and counted. */
export class SkippedMembers {
  private readonly kinds = new Map<string, string[]>();

  constructor(readonly container: string) {}

  /** `why` is one of SKIPPED or words of the same form: "a picture". */
  add(why: string, path: string): void {
    const names = this.kinds.get(why) ?? [];
    names.push(path);
    this.kinds.set(why, names);
  }

  problems(): TrendProblem[] {
    return [...this.kinds].map(([why, names]) => {
      const named = names.slice(0, MOST_NAMED).map((name) => `"${name}"`);
      const more = names.length - named.length;
      const list = more > 0 ? `${named.join(', ')} and ${more} more` : named.join(', ');
      const is = names.length === 1 ? 'it is' : 'each is';
      const message = `"${this.container}": ${list} not read, because ${is} ${why}.`;
      return { code: 'member-skipped', severity: 'warning', message, count: names.length };
    });
  }
}
