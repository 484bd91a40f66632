import { createGunzip } from 'node:zlib';
import { detectEncoding, isZip } from '../trends/encoding';
import { TrendError, type TrendProblem } from '../trends/types';
import { ChunkedBytes, type ChunkSource } from './chunked-bytes';
import { MemberNames, safeMemberName } from './member-name';
import { sheetToCsv } from './sheet-csv';
import { SKIPPED, SkippedMembers } from './skipped-members';
import { refuseRatio, type UnpackBudget } from './unpack-budget';
import { isWorkbook, otherOfficeFile, readWorkbookParts } from './workbook-parts';
import { ZipArchive, through, type ZipMember } from './zip-archive';

/** Where one member goes. Either `keep` or `discard` ends it. */
export interface MemberWriter {
  write(bytes: Uint8Array): Promise<void>;
  /** It counts as a text file from here on. */
  keep(): Promise<void>;
  /** Ends the writing and gives back what was written, until `discard`. */
  reopen(): Promise<ChunkSource>;
  discard(): Promise<void>;
}

export interface MemberSink {
  begin(name: string): MemberWriter;
}

/** What a container is unpacked with, and what has come of it. */
interface Unpacking {
  sink: MemberSink;
  budget: UnpackBudget;
  names: MemberNames;
  /** Files of the container that became text. */
  kept: number;
}

/** Enough of a member to tell what it is; at least what the encoding is told from. */
const HEAD_BYTES = 64 * 1024;
const GZIP = [0x1f, 0x8b];
/** Whether the bytes begin a gzip file. */
export const startsAsGzip = (head: Uint8Array): boolean => GZIP.every((byte, index) => head[index] === byte);
const SYSTEM_FILE = /(^|\/)(__MACOSX\/|\.DS_Store$|\._[^/]*$|Thumbs\.db$|desktop\.ini$)/i;
/** Pictures, documents, programs, and the notes that come with an export. */
const NO_TREND =
  /(?:^|\/)(?:read[ _-]?me|licen[cs]e)(?:\.(?:txt|md))?$|\.(png|jpe?g|gif|bmp|webp|svg|ico|tiff?|heic|pdf|md|docx?|pptx?|rtf|html?|xml|json|exe|dll|bat|cmd|ps1|sh|py|js|jar|mp[34]|wav|avi|mov)$/i;

/**
 * Unpacks a zip archive, a workbook or a gzip file into text files: each member of the archive that is text, gzip inside it unpacked; each
 * visible sheet with two rows or more as comma-separated text; what was packed by gzip under the name of its file. A workbook inside an archive is unpacked as well, an archive inside
 * an archive is not. Nothing is held but a few MiB and a workbook's shared strings, whatever the sizes.
 *
 * Returns  what was passed over, as warnings.
 * Throws   TrendError, with a sentence for the person, when it is damaged, encrypted, a bomb or holds no text at all; what the
 *          source and the sink throw.
 */
export async function unpackContainer(
  source: ChunkSource,
  name: string,
  sink: MemberSink,
  budget: UnpackBudget,
): Promise<TrendProblem[]> {
  const bytes = new ChunkedBytes(source);
  const unpacking: Unpacking = { sink, budget, names: new MemberNames(), kept: 0 };
  if (startsAsGzip(await bytes.read(0, GZIP.length))) return unpackGzip(unpacking, bytes, name);
  const archive = await ZipArchive.open(name, bytes);
  const problems = isWorkbook(archive)
    ? await unpackWorkbook(unpacking, archive, name, bytes.sizeBytes)
    : await unpackArchive(unpacking, archive, name);
  if (unpacking.kept > 0) return problems;
  const why = problems.map(({ message }) => ` ${message}`).join('');
  throw new TrendError(
    'empty',
    `"${name}" holds no text or sheet that could be a trend log.${why} Put the exported CSV files or a workbook with the trend into it and send it again.`,
  );
}

/** A file as it was before it was packed: text, or an archive or workbook that is unpacked in turn. */
async function unpackGzip(unpacking: Unpacking, bytes: ChunkedBytes, name: string): Promise<TrendProblem[]> {
  const { budget, sink } = unpacking;
  const packed = pieces(bytes);
  const { head, rest, close } = await withHead(gunzipped(packed, name, bytes.sizeBytes, budget));
  if (isZip(head)) {
    const writer = sink.begin(name);
    const size = await fill(rest, writer, budget);
    const problems = await unpackContainer(await writer.reopen(), name, sink, budget);
    await writer.discard();
    budget.release(size);
    return problems;
  }
  const why = startsAsGzip(head) ? 'another gzip file' : whyNoText(head);
  if (why !== null) {
    await close();
    const holds = why === SKIPPED.empty ? 'nothing' : why;
    throw new TrendError(
      'unsupported',
      `"${name}" holds ${holds}, which is not read here. Export the trend as CSV and send that.`,
    );
  }
  budget.addFile();
  await copy(rest, sink.begin(name), budget);
  unpacking.kept++;
  return [];
}

async function* pieces(bytes: ChunkedBytes): AsyncGenerator<Buffer> {
  for await (const part of bytes.range(0, bytes.sizeBytes))
    yield Buffer.from(part.buffer, part.byteOffset, part.length);
}

/** Writes everything; the number of bytes. */
async function fill(source: AsyncIterable<Buffer>, writer: MemberWriter, budget: UnpackBudget): Promise<number> {
  let size = 0;
  for await (const piece of source) {
    size += piece.length;
    budget.addStored(piece.length);
    await writer.write(piece);
  }
  return size;
}

async function unpackArchive(unpacking: Unpacking, archive: ZipArchive, name: string): Promise<TrendProblem[]> {
  const office = otherOfficeFile(archive);
  if (office !== null)
    throw new TrendError('unsupported', `"${name}" is ${office}, which is not read here. Export the trend as CSV.`);
  const skipped = new SkippedMembers(name);
  const problems: TrendProblem[] = [];
  for (const member of archive.members) {
    if (member.isDirectory) continue;
    const label = safeMemberName(name, member.path);
    const why = whySkipped(member);
    if (why === null) problems.push(...(await unpackMember(unpacking, archive, member, label, skipped)));
    else skipped.add(why, innerName(label, name));
  }
  return [...skipped.problems(), ...problems];
}

const innerName = (label: string, container: string): string =>
  label.startsWith(`${container}/`) ? label.slice(container.length + 1) : label;

function whySkipped(member: ZipMember): string | null {
  if (SYSTEM_FILE.test(member.path)) return SKIPPED.system;
  if (NO_TREND.test(member.path)) return SKIPPED.name;
  if (member.isLink) return SKIPPED.link;
  return member.sizeBytes === 0 ? SKIPPED.empty : null;
}

async function unpackMember(
  unpacking: Unpacking,
  archive: ZipArchive,
  member: ZipMember,
  label: string,
  skipped: SkippedMembers,
): Promise<TrendProblem[]> {
  const { budget } = unpacking;
  let { head, rest, close } = await withHead(archive.read(member, label, budget));
  if (startsAsGzip(head)) {
    const packed = member.entry.compressedSize;
    ({ head, rest, close } = await withHead(gunzipped(rest, label, packed, budget)));
  }
  const name = unpacking.names.unique(label);
  if (isZip(head)) return unpackInner(unpacking, name, rest);
  const why = whyNoText(head);
  if (why !== null) {
    skipped.add(why, innerName(label, skipped.container));
    await close();
    return [];
  }
  budget.addFile();
  await copy(rest, unpacking.sink.begin(name), budget);
  unpacking.kept++;
  return [];
}

interface Looked {
  head: Buffer;
  /** The whole stream, the head included. */
  rest: AsyncGenerator<Buffer>;
  /** Lets go of a stream that is not read. */
  close: () => Promise<unknown>;
}

/** Looks at the first bytes of a stream without taking them out of it. */
async function withHead(source: AsyncGenerator<Buffer>): Promise<Looked> {
  const parts: Buffer[] = [];
  let length = 0;
  while (length < HEAD_BYTES) {
    const next = await source.next();
    if (next.done === true) break;
    parts.push(next.value);
    length += next.value.length;
  }
  async function* whole(): AsyncGenerator<Buffer> {
    try {
      yield* parts;
      yield* source;
    } finally {
      await source.return(undefined);
    }
  }
  return { head: Buffer.concat(parts), rest: whole(), close: () => source.return(undefined) };
}

async function* gunzipped(
  packed: AsyncGenerator<Buffer>,
  label: string,
  packedBytes: number,
  budget: UnpackBudget,
): AsyncGenerator<Buffer> {
  let count = 0;
  try {
    for await (const piece of through(packed, createGunzip({ chunkSize: 64 * 1024 }))) {
      count += piece.length;
      refuseRatio(label, count, packedBytes);
      budget.addInflated(piece.length);
      yield piece;
    }
  } catch (error) {
    if (!(error instanceof Error && 'code' in error && String(error.code).startsWith('Z_'))) throw error;
    throw new TrendError(
      'unsupported',
      `"${label}" is a damaged gzip file, or one that was cut short. Pack it again and send it again.`,
    );
  }
}

/** What a member is that is no text; null for text. */
function whyNoText(head: Buffer): string | null {
  if (head.length === 0) return SKIPPED.empty;
  try {
    detectEncoding(head);
    return null;
  } catch (error) {
    if (!(error instanceof TrendError)) throw error;
    const [, what] = /^This is (.+), not text\./.exec(error.message) ?? [];
    return what ?? 'no text';
  }
}

async function copy(source: AsyncIterable<Buffer>, writer: MemberWriter, budget: UnpackBudget): Promise<void> {
  await fill(source, writer, budget);
  await writer.keep();
}

/** A workbook in an archive is kept for a while as it is, because its parts are read from all over it. */
async function unpackInner(
  unpacking: Unpacking,
  name: string,
  content: AsyncIterable<Buffer>,
): Promise<TrendProblem[]> {
  const { budget, sink } = unpacking;
  budget.addFile();
  const writer = sink.begin(name);
  const size = await fill(content, writer, budget);
  const archive = await ZipArchive.open(name, new ChunkedBytes(await writer.reopen()));
  if (!isWorkbook(archive)) {
    const what = otherOfficeFile(archive) ?? 'a zip archive inside a zip archive';
    const message = `"${name}" is ${what}, which is not read here. Unpack it, and send the files in it.`;
    throw new TrendError('unsupported', message);
  }
  const problems = await unpackWorkbook(unpacking, archive, name, size);
  await writer.discard();
  budget.release(size);
  return problems;
}

async function unpackWorkbook(
  unpacking: Unpacking,
  archive: ZipArchive,
  name: string,
  packedBytes: number,
): Promise<TrendProblem[]> {
  const { budget, sink, names } = unpacking;
  const skipped = new SkippedMembers(name);
  const parts = await readWorkbookParts(archive, name, budget);
  let textBytes = 0;
  for (const sheet of parts.sheets) {
    const label = names.unique(safeMemberName(name, sheet.name));
    if (sheet.hidden) {
      skipped.add(SKIPPED.hidden, sheet.name);
      continue;
    }
    budget.addFile();
    const writer = sink.begin(label);
    let sheetBytes = 0;
    const { rows } = await sheetToCsv(label, parts, archive.read(sheet.member, label, budget), async (text) => {
      const bytes = Buffer.from(text, 'utf8');
      textBytes += bytes.length;
      sheetBytes += bytes.length;
      refuseRatio(label, textBytes, packedBytes);
      budget.addStored(bytes.length);
      await writer.write(bytes);
    });
    if (rows >= 2) {
      await writer.keep();
      unpacking.kept++;
      continue;
    }
    skipped.add(rows === 0 ? SKIPPED.empty : SKIPPED.short, sheet.name);
    await writer.discard();
    budget.release(sheetBytes);
  }
  return skipped.problems();
}
