export const SECOND_MS = 1000;
export const MINUTE_MS = 60_000;
export const HOUR_MS = 3_600_000;
export const DAY_MS = 86_400_000;

export const COLON = 58;
export const DOT = 46;
export const COMMA = 44;
export const SLASH = 47;
export const SPACE = 32;
export const PLUS = 43;
export const MINUS = 45;
export const UNDERSCORE = 95;
export const CAPITAL_T = 84;
export const OPENING_BRACKET = 91;
const ZERO = 48;

export const isDigit = (code: number): boolean => code >= 48 && code <= 57;
/** Latin letters, with accents. */
export const isLetter = (code: number): boolean =>
  ((code | 32) >= 97 && (code | 32) <= 122) || (code >= 192 && code <= 591);
export const isSpace = (code: number): boolean =>
  code === 32 || code === 9 || code === 160 || code === 0x202f || code === 13 || code === 10;

/** A place in a text that moves on as its parts are read. Nothing here allocates but `readWord`. */
export class StampScanner {
  protected text = '';
  protected at = 0;
  /** How many digits the last number had. */
  protected digits = 0;

  protected code(): number {
    return this.text.charCodeAt(this.at);
  }

  protected codeAt(at: number): number {
    return this.text.charCodeAt(at);
  }

  protected skipSpaces(): void {
    while (isSpace(this.code())) this.at++;
  }

  /** Digits from here on as a number; `digits` says how many there were. */
  protected readNumber(): number {
    let value = 0;
    const start = this.at;
    let code = this.code();
    while (isDigit(code)) {
      value = value * 10 + code - ZERO;
      code = this.codeAt(++this.at);
    }
    this.digits = this.at - start;
    return value;
  }

  protected readWord(): string {
    const start = this.at;
    while (isLetter(this.code())) this.at++;
    return this.text.slice(start, this.at);
  }

  /** The sign between two parts of a date (a blank when there is nothing else), or 0 when there is none. */
  protected skipSeparator(): number {
    const start = this.at;
    this.skipSpaces();
    const code = this.code();
    const sign = code === SLASH || code === MINUS || code === DOT || code === COMMA;
    if (sign) this.at++;
    this.skipSpaces();
    return this.at === start ? 0 : sign ? code : SPACE;
  }
}
