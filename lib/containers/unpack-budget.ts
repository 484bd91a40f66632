import { TrendError } from '../trends/types';
import { sizeInWords } from '../commands/upload-limit';

/** Below this a high ratio harms nobody: a small file may well be of one letter. */
const FREE_BYTES = 10 * 1024 * 1024;
/** Trend text and workbook XML shrink to a fifth or a thirtieth; deflate itself can reach a thousandth. */
const MOST_TIMES_LARGER = 200;
const MOST_FILES = 2000;

/** What one upload may become when its containers are unpacked; counted over all of them. */
export class UnpackBudget {
  private inflatedBytes = 0;
  private files = 0;

  constructor(
    readonly limitBytes: number,
    /** Bytes of text the upload holds already. */
    private storedBytes = 0,
  ) {}

  /** Bytes that came out of a compressed member, whether kept or not. */
  addInflated(bytes: number): void {
    this.inflatedBytes += bytes;
    if (this.inflatedBytes > this.limitBytes) throw this.tooLarge();
  }

  /** Bytes of text that are kept. */
  addStored(bytes: number): void {
    this.storedBytes += bytes;
    if (this.storedBytes > this.limitBytes) throw this.tooLarge();
  }

  /** One more file that is written, kept or not. */
  addFile(): void {
    if (++this.files <= MOST_FILES) return;
    throw new TrendError(
      'unsupported',
      `The upload has more than ${MOST_FILES.toLocaleString('en-US')} files once unpacked, the limit of one upload. Split it and send the parts one by one.`,
    );
  }

  /** Gives back what was kept only for a while. */
  release(bytes: number): void {
    this.storedBytes -= bytes;
  }

  /** Throws when `announced` further bytes would be too many: nothing of them is unpacked then. */
  announce(announced: number): void {
    if (this.inflatedBytes + announced > this.limitBytes) throw this.tooLarge();
  }

  private tooLarge(): TrendError {
    return new TrendError(
      'unsupported',
      `The upload is larger than ${sizeInWords(this.limitBytes)} once unpacked, the limit of one upload. Split it by time and send the parts one by one.`,
    );
  }
}

/** Refuses what grows out of proportion to the bytes it was packed in. */
export function refuseRatio(name: string, unpackedBytes: number, packedBytes: number): void {
  if (unpackedBytes <= FREE_BYTES || unpackedBytes <= MOST_TIMES_LARGER * packedBytes) return;
  throw new TrendError(
    'unsupported',
    `"${name}" unpacks to more than ${MOST_TIMES_LARGER} times its packed size, which no trend log does. Send the file as it was before it was packed.`,
  );
}
