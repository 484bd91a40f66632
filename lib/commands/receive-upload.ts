import { createHash } from 'node:crypto';
import type { EntityManager } from '@mikro-orm/postgresql';
import { storeChunk } from '../db/chunks';
import { withTenant } from '../db/tenant';
import { problem, ProblemError } from '../http/problem';
import { log } from '../log';
import { closeUpload, failUpload, openUpload, type ReceivedFile, type UploadOwner } from './open-upload';
import { plainContent, type Meter } from './plain-content';
import { incomingBody, safeFilename, type IncomingBody, type IncomingFile } from './upload-files';
import { sizeInWords } from './upload-limit';

export interface ReceiveOptions {
  owner: UploadOwner;
  request: Request;
  /** The name of a raw body; a form's parts bring their own. */
  filename?: string | undefined;
  limitBytes: number;
  /** Joins the transaction that makes the upload count. */
  onClose?: (em: EntityManager, upload: { id: string; status: 'received'; sha256: string }) => Promise<void>;
}

/**
 * Receives the file, or files, of a request and stores them piece by piece; memory does not grow with the body. At the end the
 * upload is `received` and its reading enqueued; when it does not come to an end nothing of it is kept, and its row says why.
 *
 * Throws  problems in words: 413 over the limit, 415 for what is not text, 400 for a body that is empty, cut short or damaged.
 */
export async function receiveUpload(
  options: ReceiveOptions,
): Promise<{ id: string; status: 'received'; sha256: string }> {
  const { owner, request, limitBytes } = options;
  await refuseAnnouncedSize(options);
  const body = incomingBody(request, options.filename);
  const receiving: Receiving = { options, body, meter: meterOf(body, limitBytes), uploadId: null, files: [] };
  try {
    for await (const file of body.files) await receiveFile(receiving, file);
    return await finish(receiving);
  } catch (error) {
    const refusal = inWords(error);
    body.discard();
    if (receiving.uploadId !== null) {
      const of = { uploadId: receiving.uploadId, organizationId: owner.organizationId };
      log.warn({ ...of, reason: refusal.status === 500 ? String(error) : refusal.detail }, 'upload.failed');
      // With the database away the row stays behind as `receiving`; the worker's janitor ends it.
      await failUpload(owner, receiving.uploadId, codeOf(refusal), refusal.detail).catch((failure: unknown) =>
        log.error({ ...of, err: failure }, 'upload.unfinished'),
      );
    }
    throw refusal.status === 500 ? error : refusal;
  }
}

interface Receiving {
  options: ReceiveOptions;
  body: IncomingBody;
  meter: Meter;
  /** Null until the first bytes of the first file have shown that it can be text. */
  uploadId: string | null;
  files: ReceivedFile[];
}

async function receiveFile(receiving: Receiving, file: IncomingFile): Promise<void> {
  const { owner, request } = receiving.options;
  const announcedBytes = announced(request);
  const { pieces, summary } = plainContent(file.name, file.content, receiving.meter);
  let seq = 0;
  for await (const piece of pieces) {
    receiving.uploadId ??= await openUpload(owner, file.name);
    const chunk = {
      organizationId: owner.organizationId,
      uploadId: receiving.uploadId,
      fileIndex: receiving.files.length,
      seq: seq++,
    };
    const arrived = { receivedBytes: receiving.body.receivedBytes(), announcedBytes };
    if (!(await storeChunk(chunk, piece, arrived))) throw givenUp();
  }
  if (seq === 0) {
    const others =
      receiving.files.length > 0 ? ' Nothing of this drop was kept: leave it out and send the rest again.' : '';
    throw problem(400, 'Invalid input', `"${file.name}" is empty: it has no bytes at all.${others}`);
  }
  receiving.files.push({ name: file.name, ...summary() });
}

async function finish(receiving: Receiving): Promise<{ id: string; status: 'received'; sha256: string }> {
  const { options, files, uploadId } = receiving;
  const [first] = files;
  refuseShortBody(options.request, receiving.body.receivedBytes());
  if (uploadId === null || !first) {
    throw problem(400, 'Invalid input', 'The form has no file in a field named "file".', [
      { path: 'file', message: 'Send the file in a field named "file".' },
    ]);
  }
  const sha256 = hashOfFiles(files);
  const upload = { id: uploadId, status: 'received' as const, sha256 };
  await withTenant({ organizationIds: [options.owner.organizationId] }, async (em) => {
    const place = await closeUpload(em, options.owner, uploadId, {
      filename: files.length === 1 ? first.name : `${first.name} and ${files.length - 1} more`,
      sizeBytes: files.reduce((sum, each) => sum + each.sizeBytes, 0),
      sha256,
      files,
    });
    if (place === null) throw givenUp();
    await options.onClose?.(em, upload);
  });
  return upload;
}

/** One file's own hash; of several, the hash of their hashes in the order they came. */
function hashOfFiles(files: readonly { sha256: string }[]): string {
  const [first] = files;
  if (first && files.length === 1) return first.sha256;
  return createHash('sha256')
    .update(files.map((each) => each.sha256).join('\n'))
    .digest('hex');
}

/** What `receiveUpload` would call the hash of a body, without keeping any of it: for a request that is sent a second time. */
export async function hashOfBody(request: Request, filename: string | undefined, limitBytes: number): Promise<string> {
  const body = incomingBody(request, filename);
  const meter = meterOf(body, limitBytes);
  const files: { sha256: string }[] = [];
  try {
    for await (const file of body.files) {
      const { pieces, summary } = plainContent(file.name, file.content, meter);
      for await (const _ of pieces) continue;
      files.push(summary());
    }
  } catch (error) {
    body.discard();
    const refusal = inWords(error);
    throw refusal.status === 500 ? error : refusal;
  }
  return hashOfFiles(files);
}

function meterOf(body: IncomingBody, limitBytes: number): Meter {
  const meter: Meter = {
    plainBytes: 0,
    limitBytes,
    check: () => {
      if (body.receivedBytes() > limitBytes) throw overLimit(limitBytes, false);
      if (meter.plainBytes > limitBytes) throw overLimit(limitBytes, true);
    },
  };
  return meter;
}

/** A body that says beforehand that it is too large is refused before it is read, and still leaves a row that says so. */
async function refuseAnnouncedSize({ owner, request, filename, limitBytes }: ReceiveOptions): Promise<void> {
  if ((announced(request) ?? 0) <= limitBytes) return;
  const refusal = overLimit(limitBytes, false);
  // A form's file names stand in the body, which is not read any more.
  const name = filename === undefined ? 'a file over the limit' : safeFilename(filename);
  const uploadId = await openUpload(owner, name);
  await failUpload(owner, uploadId, codeOf(refusal), refusal.detail);
  throw refusal;
}

/** The length a client says its body has; null when it does not say. */
function announced(request: Request): number | null {
  const length = request.headers.get('content-length');
  return length === null ? null : Number(length);
}

function refuseShortBody(request: Request, receivedBytes: number): void {
  const announcedBytes = announced(request);
  if (announcedBytes !== null && announcedBytes !== receivedBytes) {
    const message = `${receivedBytes} of ${announcedBytes} bytes arrived: the file is cut short. Nothing of it is kept; send it again.`;
    throw problem(400, 'Invalid input', message);
  }
}

const overLimit = (limitBytes: number, unpacked: boolean): ProblemError =>
  problem(
    413,
    'Content too large',
    `The upload is larger than ${sizeInWords(limitBytes)}${unpacked ? ' once unpacked' : ''}, the limit of one upload. Nothing of it is kept; split it by time and send the parts one by one.`,
  );

const givenUp = (): ProblemError =>
  problem(409, 'Conflict', 'The upload was ended while it was still being sent. Nothing of it is kept; send it again.');

const CODES: Readonly<Record<number, string>> = { 409: 'half-finished', 413: 'too-large', 415: 'unsupported' };
const codeOf = (refusal: ProblemError): string => CODES[refusal.status] ?? 'half-finished';

/** What ended a body, as a problem: a connection or form that broke off is the sender's to mend, the rest is ours. */
function inWords(error: unknown): ProblemError {
  if (error instanceof ProblemError) return error;
  if (isBrokenOff(error)) {
    const message = 'The upload stopped before the whole file had arrived. Nothing of it is kept; send the file again.';
    return problem(400, 'Invalid input', message);
  }
  return problem(500, 'Internal error', 'The file could not be stored. Nothing of it is kept; send it again.');
}

function isBrokenOff(error: unknown): boolean {
  if (!(error instanceof Error)) return false;
  const code = 'code' in error ? String(error.code) : '';
  return (
    /^(ECONNRESET|ERR_STREAM_PREMATURE_CLOSE|ERR_HTTP_REQUEST_TIMEOUT|ABORT_ERR)$/.test(code) ||
    error.name === 'AbortError' ||
    /Unexpected end of (form|file)|Malformed part header|aborted|terminated/.test(error.message)
  );
}
