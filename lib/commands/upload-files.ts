import { PassThrough, Readable, finished } from 'node:stream';
import type { ReadableStream as NodeReadableStream } from 'node:stream/web';
import busboy from 'busboy';
import { problem } from '../http/problem';

/** One file of an upload, to be read to its end before the next. */
export interface IncomingFile {
  name: string;
  content: Readable;
}

/** A body whose files are read one after the other, with the bytes that have come in so far. */
export interface IncomingBody {
  files: AsyncIterable<IncomingFile>;
  receivedBytes: () => number;
  /** Reads and forgets what still comes, so that a refusal reaches a client that is still sending. */
  discard: () => void;
}

const RAW_TYPES = new Set([
  '',
  'text/csv',
  'text/plain',
  'text/tab-separated-values',
  'application/csv',
  'application/gzip',
  'application/x-gzip',
  'application/zip',
  'application/x-zip-compressed',
  'application/vnd.openxmlformats-officedocument.spreadsheetml.sheet',
  'application/octet-stream',
]);
const MOST_FILES = 500;
/** What a refused client may still send before its connection is cut. */
const MOST_DISCARDED_BYTES = 256 * 1024 * 1024;

/** The last part of a path, without what a name cannot hold; never empty. */
export function safeFilename(name: string | undefined): string {
  const last = (name ?? '').split(/[/\\]/).at(-1) ?? '';
  const clean = Array.from(last)
    .filter((letter) => letter >= ' ' && letter !== '\u007f')
    .join('')
    .trim();
  return clean === '' ? 'upload.csv' : clean.slice(-200);
}

/**
 * The files of a request: the `file` parts of a form, or the whole body as one file. Nothing is buffered beyond what one read
 * brings.
 *
 * Throws  415 for a type that is neither, 400 for a form without a boundary. Iterating throws what the connection or the form
 *         ends with.
 */
export function incomingBody(request: Request, filename: string | undefined): IncomingBody {
  const type = (request.headers.get('content-type') ?? '').split(';')[0]?.trim().toLowerCase() ?? '';
  const isForm = type === 'multipart/form-data';
  if (!isForm && !RAW_TYPES.has(type)) {
    const message = `A body of type "${type}" is not read here. Send a form with a "file" field, or the file itself as text/csv, application/gzip or application/zip.`;
    throw problem(415, 'Unsupported media type', message);
  }
  const source = request.body
    ? Readable.fromWeb(request.body as unknown as NodeReadableStream<Uint8Array>)
    : Readable.from([]);
  let received = 0;
  source.on('data', (chunk: Buffer) => (received += chunk.byteLength));
  source.pause();
  // Every reader below hears of a failure by itself; this one keeps a late failure from ending the process.
  source.on('error', () => undefined);
  const files = isForm ? formFiles(source, request.headers) : wholeBody(source, filename);
  return { files, receivedBytes: () => received, discard: () => discardRest(source) };
}

async function* wholeBody(source: Readable, filename: string | undefined): AsyncGenerator<IncomingFile> {
  yield { name: safeFilename(filename), content: source };
}

async function* formFiles(source: Readable, headers: Headers): AsyncGenerator<IncomingFile> {
  const parser = formParser(headers);
  const found = new PassThrough({ objectMode: true });
  // The parser's `finish` may come before its last file has been read: `found` ends then, and hands out what it holds.
  const end = (error?: Error | null) => (error ? found.destroy(error) : found.end());
  found.on('error', () => undefined);
  parser.on('file', (field, content, { filename }) => {
    content.on('error', () => undefined);
    if (field === 'file') found.write({ name: safeFilename(filename), content });
    else content.resume();
  });
  parser.on('partsLimit', () => end(problem(400, 'Invalid input', `A drop may hold ${MOST_FILES} files at the most.`)));
  parser.on('error', (error: Error) => end(error));
  parser.on('finish', () => end());
  finished(source, { writable: false }, (error) => {
    if (error) parser.destroy(error);
  });
  source.pipe(parser);
  try {
    yield* found;
  } finally {
    source.unpipe(parser);
  }
}

function formParser(headers: Headers): busboy.Busboy {
  try {
    return busboy({
      headers: Object.fromEntries(headers),
      defParamCharset: 'utf8',
      limits: { parts: MOST_FILES },
    });
  } catch {
    throw problem(
      400,
      'Invalid input',
      'The form names no boundary in its Content-Type, so its parts cannot be told apart.',
    );
  }
}

function discardRest(source: Readable): void {
  if (source.destroyed || source.readableEnded) return;
  let discarded = 0;
  source.on('data', (chunk: Buffer) => {
    discarded += chunk.byteLength;
    if (discarded > MOST_DISCARDED_BYTES) source.destroy();
  });
  source.resume();
}
