import { isAscii } from 'node:buffer';
import { TrendError, type Dialect } from './types';

export type Encoding = Dialect['encoding'];

/** First bytes of files that people drop in place of a CSV, and what they are called. */
const SIGNATURES: readonly (readonly [name: string, bytes: readonly number[]])[] = [
  ['a spreadsheet workbook or a zip archive', [0x50, 0x4b, 0x03, 0x04]],
  ['an empty zip archive', [0x50, 0x4b, 0x05, 0x06]],
  ['one part of a split zip archive', [0x50, 0x4b, 0x07, 0x08]],
  ['a PDF document', [0x25, 0x50, 0x44, 0x46]],
  ['an old spreadsheet workbook (xls)', [0xd0, 0xcf, 0x11, 0xe0]],
  ['a gzip archive inside the file', [0x1f, 0x8b]],
  ['a bzip2 archive', [0x42, 0x5a, 0x68]],
  ['an xz archive', [0xfd, 0x37, 0x7a, 0x58, 0x5a]],
  ['a zstd archive', [0x28, 0xb5, 0x2f, 0xfd]],
  ['a RAR archive', [0x52, 0x61, 0x72, 0x21, 0x1a, 0x07]],
  ['a picture', [0x89, 0x50, 0x4e, 0x47]],
  ['a picture', [0xff, 0xd8, 0xff]],
  ['a picture', [0x47, 0x49, 0x46, 0x38]],
  ['a 7z archive', [0x37, 0x7a, 0xbc, 0xaf]],
  ['a Parquet table', [0x50, 0x41, 0x52, 0x31]],
  ['an SQLite database', [0x53, 0x51, 0x4c, 0x69, 0x74, 0x65]],
];

const startsWith = (head: Uint8Array, bytes: readonly number[]): boolean => bytes.every((byte, i) => head[i] === byte);

/** Whether a file is a zip archive, which a workbook is too: not text, but lib/containers makes text of it. */
export const isZip = (head: Uint8Array): boolean => startsWith(head, [0x50, 0x4b, 0x03, 0x04]);

const EXPORT_AS_CSV = 'Export the trend as CSV text and drop that file.';
/** A logger may write a few stray control bytes; more than this share of them is no text. */
const MOST_CONTROL_SHARE = 0.02;
const LOOKED_AT_BYTES = 65_536;

/**
 * Which of the four encodings the head of a file is in: byte-order mark, else the pattern of zero bytes (UTF-16), else
 * whether it is valid UTF-8, else Windows-1252.
 *
 * Throws  TrendError `empty` when there are no bytes, `not-text` for known binary files and for bytes that are no text.
 */
export function detectEncoding(head: Uint8Array): Encoding {
  if (head.length === 0) throw new TrendError('empty', 'The file is empty. Export the trend again and drop that file.');
  const signature = SIGNATURES.find(([, bytes]) => startsWith(head, bytes));
  if (signature) throw new TrendError('not-text', `This is ${signature[0]}, not text. ${EXPORT_AS_CSV}`);
  if (head[0] === 0xff && head[1] === 0xfe) return 'utf-16le';
  if (head[0] === 0xfe && head[1] === 0xff) return 'utf-16be';
  const looked = head.subarray(0, LOOKED_AT_BYTES);
  const utf16 = zeroBytePattern(looked);
  if (utf16) return utf16;
  let control = 0;
  for (const byte of looked) if (byte < 32 && !(byte >= 9 && byte <= 13)) control++;
  if (control > looked.length * MOST_CONTROL_SHARE)
    throw new TrendError('not-text', `The file holds binary data, not text. ${EXPORT_AS_CSV}`);
  return isUtf8(head) ? 'utf-8' : 'windows-1252';
}

/** UTF-16 of mostly Latin text without a mark: nearly every other byte is zero, and only on one side. */
function zeroBytePattern(bytes: Uint8Array): Encoding | null {
  const pairs = Math.floor(bytes.length / 2);
  if (pairs < 4) return null;
  let even = 0;
  let odd = 0;
  for (let i = 0; i < pairs * 2; i += 2) {
    if (bytes[i] === 0) even++;
    if (bytes[i + 1] === 0) odd++;
  }
  if (odd > pairs * 0.7 && even < pairs * 0.05) return 'utf-16le';
  if (even > pairs * 0.7 && odd < pairs * 0.05) return 'utf-16be';
  return null;
}

/** A head may end in the middle of a character: in stream mode that is no error. */
function isUtf8(bytes: Uint8Array): boolean {
  try {
    new TextDecoder('utf-8', { fatal: true }).decode(bytes, { stream: true });
    return true;
  } catch {
    return false;
  }
}

/**
 * Decodes a file piece by piece; a piece may end anywhere, also inside a character. Plain ASCII pieces, the usual case,
 * take a shorter way to one-byte strings, which halves the memory of everything cut from them.
 */
export class TextStream {
  private readonly decoder: TextDecoder;
  private mayHoldHalf = false;

  constructor(private readonly encoding: Encoding) {
    this.decoder = new TextDecoder(encoding);
  }

  decode(bytes: Uint8Array): string {
    const ascii = !this.encoding.startsWith('utf-16') && isAscii(bytes);
    if (ascii && !this.mayHoldHalf)
      return Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength).toString('latin1');
    this.mayHoldHalf = !ascii;
    return this.decoder.decode(bytes, { stream: true });
  }

  /** What is left of a character that was cut by the end of the file. */
  end(): string {
    return this.decoder.decode();
  }
}
