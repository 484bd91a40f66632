import { TrendError } from '../trends/types';
import { SerialTimes } from './serial-time';
import { unescaped, type WorkbookParts } from './workbook-parts';
import { MOST_TEXT_CHARACTERS, readXml } from './xml-events';

/** The size of a sheet, which no spreadsheet program exceeds. */
const MOST_ROWS = 1_048_576;
const MOST_COLUMNS = 16_384;
/** Text is handed on in about these pieces. */
const PIECE_CHARACTERS = 256 * 1024;
const NEEDS_QUOTES = /[",\r\n]/;
/** A number as every program writes it; beyond fifteen digits the last ones are noise of binary fractions. */
const PLAIN_NUMBER = /^-?\d[\d.]{0,14}$/;

/**
 * A worksheet's XML as comma-separated text (RFC 4180, UTF-8, line feeds): an empty line for an empty row, empty cells up to the
 * widest row so far, so that every row below the heading is as wide as the heading.
 *
 * Shapes  times `YYYY-MM-DD HH:MM:SS` local, `HH:MM:SS` without a day, `YYYY-MM-DD` for a whole day shown as a date; percentages
 *         with their sign; other numbers unrounded in their shortest decimal form; TRUE and
 *         FALSE; errors as shown (#N/A); formulas by the value that was kept with them.
 * Gaps    a cell without a value is empty.
 * Throws  TrendError `unsupported`, in words that name `label`, for damage and cells outside a sheet; what `write` throws.
 */
export async function sheetToCsv(
  label: string,
  parts: Pick<WorkbookParts, 'since1904' | 'kinds' | 'sharedStrings'>,
  input: AsyncIterable<Uint8Array>,
  write: (text: string) => Promise<void>,
): Promise<{ rows: number }> {
  const sheet = new SheetText(label, parts);
  await readXml(label, input, {
    open: (name, attributes) => sheet.open(name, attributes),
    text: (text) => sheet.text(text),
    close: (name) => sheet.close(name),
    piece: async () => {
      if (sheet.pending.length >= PIECE_CHARACTERS) await write(sheet.take());
    },
  });
  if (sheet.pending !== '') await write(sheet.take());
  return { rows: sheet.rows };
}

class SheetText {
  /** Rows that hold something. */
  rows = 0;
  pending = '';
  private readonly times: SerialTimes;
  private inRows = false;
  private inInline = false;
  private phonetic = 0;
  private capturing = false;
  /** Numbers of the last row and of the present row's next free column. */
  private row = 0;
  private nextColumn = 0;
  private line = '';
  /** Cells that `line` has so far, and the most of any row. */
  private filled = 0;
  private width = 0;
  private column = 0;
  private type = '';
  private style = 0;
  private value = '';

  constructor(
    private readonly label: string,
    private readonly parts: Pick<WorkbookParts, 'since1904' | 'kinds' | 'sharedStrings'>,
  ) {
    this.times = new SerialTimes(parts.since1904);
  }

  take(): string {
    const text = this.pending;
    this.pending = '';
    return text;
  }

  open(name: string, attributes: Readonly<Record<string, string>>): void {
    if (name === 'sheetData') this.inRows = true;
    if (!this.inRows) return;
    if (name === 'c') this.openCell(attributes);
    else if (name === 'v') this.capturing = true;
    else if (name === 't') this.capturing = this.inInline && this.phonetic === 0;
    else if (name === 'row') this.openRow(attributes.r);
    else if (name === 'is') this.inInline = true;
    else if (name === 'rPh') this.phonetic++;
  }

  text(text: string): void {
    if (!this.capturing) return;
    this.value += text;
    if (this.value.length > MOST_TEXT_CHARACTERS) throw this.damaged('a cell holds more text than a sheet can');
  }

  close(name: string): void {
    if (!this.inRows) return;
    if (name === 'v' || name === 't') this.capturing = false;
    else if (name === 'c') this.closeCell();
    else if (name === 'row') this.closeRow();
    else if (name === 'is') this.inInline = false;
    else if (name === 'rPh') this.phonetic--;
    else if (name === 'sheetData') this.inRows = false;
  }

  private openRow(written: string | undefined): void {
    const row = written === undefined ? this.row + 1 : Number(written);
    if (!Number.isInteger(row) || row <= this.row || row > MOST_ROWS)
      throw this.damaged(`row ${written ?? row} is out of place`);
    this.pending += '\n'.repeat(row - this.row - 1);
    this.row = row;
    this.nextColumn = 0;
    this.line = '';
    this.filled = 0;
  }

  private openCell({ r: reference, t: type = 'n', s: style = '0' }: Readonly<Record<string, string>>): void {
    const column = reference === undefined ? this.nextColumn : columnOf(reference);
    if (column < this.nextColumn || column >= MOST_COLUMNS)
      throw this.damaged(`cell ${reference ?? 'beyond the last column'} is out of place`);
    this.column = column;
    this.nextColumn = column + 1;
    this.type = type;
    this.style = Number(style);
    this.value = '';
  }

  private closeCell(): void {
    const text = this.value === '' ? '' : this.cellText();
    if (text === '') return;
    // `line` has one comma between the cells it holds.
    const commas = this.filled === 0 ? this.column : this.column - this.filled + 1;
    this.line += ','.repeat(commas) + (NEEDS_QUOTES.test(text) ? `"${text.replaceAll('"', '""')}"` : text);
    this.filled = this.column + 1;
  }

  private closeRow(): void {
    if (this.filled > 0) {
      this.rows++;
      if (this.filled > this.width) this.width = this.filled;
      this.pending += this.line + ','.repeat(this.width - this.filled);
    }
    this.pending += '\n';
  }

  private cellText(): string {
    switch (this.type) {
      case 's':
        return this.parts.sharedStrings[Number(this.value)] ?? '';
      case 'str':
      case 'inlineStr':
        return unescaped(this.value);
      case 'b':
        return this.value === '1' || this.value === 'true' ? 'TRUE' : 'FALSE';
      case 'd':
        return this.value.replace('T', ' ');
      case 'e':
        return this.value;
      default:
        return this.numberText();
    }
  }

  private numberText(): string {
    const kind = this.parts.kinds[this.style] ?? 'number';
    if (kind === 'number' && PLAIN_NUMBER.test(this.value)) return this.value;
    const number = Number(this.value);
    if (Number.isNaN(number)) return this.value;
    if (kind === 'number') return String(number);
    // Kept as a fraction and shown as a percentage: the sign says which of the two the text is.
    if (kind === 'percent') return `${Number((number * 100).toPrecision(15))}%`;
    return this.times.text(number, kind) ?? String(number);
  }

  private damaged(what: string): TrendError {
    const message = `"${this.label}" is damaged: ${what}. Open it in the program it comes from, save it again and send that, or export it as CSV.`;
    return new TrendError('unsupported', message);
  }
}

/** `AB12` to 27; -1 when it is no reference. */
function columnOf(reference: string): number {
  let column = 0;
  for (let i = 0; i < reference.length && i < 4; i++) {
    const letter = reference.charCodeAt(i);
    if (letter < 65 || letter > 90) break;
    column = column * 26 + letter - 64;
  }
  return column - 1;
}
