import Papa from 'papaparse';
import { TrendError } from './types';

/** Blocks of about this many characters are parsed at once: fast, and flat in memory. */
export const BLOCK_CHARACTERS = 512 * 1024;
/** A row longer than this is no row of a trend; it would only fill the memory. */
const LONGEST_ROW = 4 * 1024 * 1024;
/** A quoted cell longer than this is a quotation mark that was never closed. */
const LONGEST_QUOTED_CELL = 8192;
/** Line ends are judged on this many characters. */
const NEWLINE_LOOK = 65_536;

export type Newline = '\n' | '\r';

/** Rows of cells of a text that starts at a row's start. Blank lines give `['']`. */
export function parseRows(text: string, delimiter: string, newline: Newline): string[][] {
  return Papa.parse<string[]>(text, { delimiter, newline, skipEmptyLines: false }).data;
}

/** Lines a row takes in a text editor: one, and one more for each line break inside its quoted cells. */
export function linesOfRow(cells: readonly string[]): number {
  let lines = 1;
  for (const cell of cells) {
    for (let at = cell.indexOf('\n'); at !== -1; at = cell.indexOf('\n', at + 1)) lines++;
  }
  return lines;
}

export const isBlankRow = (cells: readonly string[]): boolean => cells.every((cell) => cell.trim() === '');

/** Old programs end lines with a lone carriage return; everything else has a line feed. */
export function newlineOf(text: string): Newline {
  const look = text.slice(0, NEWLINE_LOOK);
  return look.includes('\n') || !look.includes('\r') ? '\n' : '\r';
}

/** Line ends of one kind and no zero bytes. */
export function tidyText(text: string, newline: Newline): string {
  const lines = newline === '\n' && text.includes('\r') ? text.replaceAll('\r\n', '\n') : text;
  return lines.includes('\0') ? lines.replaceAll('\0', '') : lines;
}

/** Where a text can be cut, or which quotation mark keeps it from being cut anywhere after it. */
interface RowEnd {
  /** Characters up to and with the last row end; 0 when there is none. */
  end: number;
  /** Position of a quotation mark that is opened and never closed, or -1. */
  strayQuote: number;
}

/**
 * The last row end of a text that starts at a row's start. A line break inside a quoted cell ends no row; a quoted
 * cell is opened only at a cell's start and closed only at a cell's end, as the parser does it.
 */
export function lastRowEnd(text: string, delimiter: string, newline: Newline, final: boolean): RowEnd {
  let from = 0;
  let end = 0;
  for (;;) {
    const quote = text.indexOf('"', from);
    // Only what lies behind the last quoted cell can end a row.
    const lineEnd = quote === -1 ? text.lastIndexOf(newline) : text.lastIndexOf(newline, quote);
    if (lineEnd >= from) end = lineEnd + 1;
    if (quote === -1) return { end, strayQuote: -1 };
    const before = quote === 0 ? newline : text[quote - 1];
    if (before !== newline && before !== delimiter) {
      from = quote + 1;
      continue;
    }
    const close = closingQuote(text, quote, delimiter, newline, final);
    if (close === -1) {
      const decided = final || text.length > quote + LONGEST_QUOTED_CELL + 2;
      return { end, strayQuote: decided ? quote : -1 };
    }
    from = close + 1;
  }
}

function closingQuote(text: string, open: number, delimiter: string, newline: Newline, final: boolean): number {
  const limit = open + LONGEST_QUOTED_CELL;
  let at = open;
  for (;;) {
    at = text.indexOf('"', at + 1);
    if (at === -1 || at > limit) return -1;
    if (text[at + 1] === '"') {
      at++;
      continue;
    }
    let next = at + 1;
    while (next < text.length && text[next] !== delimiter && text[next] !== newline && text[next]!.trim() === '')
      next++;
    if (next >= text.length) return final ? at : -1;
    if (text[next] === delimiter || text[next] === newline) return at;
  }
}

/** Cuts a stream of text into blocks of whole rows, whatever the pieces it comes in. */
export class RowCutter {
  private pieces: string[] = [];
  private length = 0;
  private newline: Newline | null = null;
  /** Zero bytes met and dropped: a logger that lost its power while it wrote leaves them. */
  zeroBytes = 0;

  /**
   * `onBlock` gets whole rows with tidy line ends. `onStrayQuote` gets the number of line ends between the last block
   * and a quotation mark that is never closed; the mark is dropped and its row read as if it were not there.
   */
  constructor(
    private readonly delimiter: string,
    private readonly onBlock: (block: string, newline: Newline) => void,
    private readonly onStrayQuote: (lineEndsBefore: number) => void,
    private readonly blockCharacters = BLOCK_CHARACTERS,
  ) {}

  push(text: string): void {
    if (text === '') return;
    this.pieces.push(text);
    this.length += text.length;
    if (this.length >= this.blockCharacters) this.cut(false);
  }

  end(): void {
    this.cut(true);
  }

  private cut(final: boolean): void {
    let text = this.pieces.join('');
    // A carriage return at the very end may be the first half of a pair.
    this.newline ??= newlineOf(final || !text.endsWith('\r') ? text : text.slice(0, -1));
    const newline = this.newline;
    // A line feed may follow in the next piece: keep a trailing carriage return back, so that pairs stay together.
    const held = !final && newline === '\n' && text.endsWith('\r') ? '\r' : '';
    if (text.includes('\0')) this.zeroBytes += text.split('\0').length - 1;
    text = tidyText(held ? text.slice(0, -1) : text, newline);
    for (;;) {
      const { end, strayQuote } = lastRowEnd(text, this.delimiter, newline, final);
      if (strayQuote === -1) {
        const cutAt = final ? text.length : end;
        if (cutAt > 0) this.onBlock(text.slice(0, cutAt), newline);
        text = text.slice(cutAt);
        if (text.length > LONGEST_ROW)
          throw new TrendError(
            'unsupported',
            'A row has over 4 million characters: the file has no line ends. Export it with one row a line.',
          );
        break;
      }
      if (end > 0) this.onBlock(text.slice(0, end), newline);
      const inRow = text.slice(end, strayQuote);
      this.onStrayQuote(inRow.split(newline).length - 1);
      text = inRow + text.slice(strayQuote + 1);
    }
    this.pieces = text + held === '' ? [] : [text + held];
    this.length = text.length + held.length;
  }
}

/** All whole rows of a text that starts at a row's start; its last row counts when the text is `complete`. */
export function wholeRows(text: string, delimiter: string, complete: boolean): string[][] {
  const rows: string[][] = [];
  const take = (block: string, newline: Newline) => {
    for (const cells of parseRows(block, delimiter, newline)) rows.push(cells);
    if (block.endsWith(newline)) rows.pop();
  };
  const cutter = new RowCutter(delimiter, take, () => undefined, 1);
  cutter.push(text);
  if (complete || rows.length === 0) cutter.end();
  return rows;
}
