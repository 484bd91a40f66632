import { randomUUID } from 'node:crypto';
import { Server, type Locker } from '@tus/server';
import { UploadEntity } from '@/entities';
import type { Access } from '../auth/access';
import { withTenant } from '../db/tenant';
import { notFound, problem, ProblemError, requirePlant, requireUpload } from '../http/route';
import { log } from '../log';
import { finishResumable } from './finish-resumable';
import { failUpload, type UploadOwner } from './open-upload';
import { offsetConflict, ResumableStore, uploadEnded } from './resumable-store';
import { sizeInWords, uploadLimitBytes } from './upload-limit';

/** Nothing to hold: each stored piece asks the row whether the file is still where its sender thinks. */
const NO_LOCK: Locker = { newLock: () => ({ lock: async () => undefined, unlock: async () => undefined }) };

/**
 * Answers one request of the tus 1.0 protocol (creation, expiration, termination): POST and OPTIONS without an upload, HEAD, PATCH
 * and DELETE of one. The asker's right is looked at in every request. A file that is complete is taken in before its last
 * request is answered, or by the next HEAD when that answer could not be given.
 *
 * Throws  problems: 404 for another organization's plant or upload, 409 for an offset that is not where the file ends, 410 for an
 *         upload that has ended, 413 over the limit or the announced length, 415 for what is not read here.
 */
export async function serveResumable(
  access: Access,
  request: Request,
  place: { plantId: string; uploadId?: string },
): Promise<Response> {
  const owner = await ownerOf(access, place);
  const store = new ResumableStore(owner);
  let refusal: unknown = null;
  const uploadId = place.uploadId ?? randomUUID();
  const limitBytes = uploadLimitBytes();
  const server = new Server({
    path: `/api/v1/plants/${place.plantId}/uploads/resumable`,
    datastore: store,
    locker: NO_LOCK,
    maxSize: limitBytes,
    relativeLocation: true,
    // No other site's page may ask.
    allowedOrigins: [],
    namingFunction: () => uploadId,
    getFileIdFromRequest: () => place.uploadId,
    onUploadCreate: async (_, { size }) => {
      if (size === 0) throw problem(400, 'Invalid input', 'The file is empty: it has no bytes at all.');
      return {};
    },
    onUploadFinish: async (_, { id }) => {
      await finishResumable(access, owner, id);
      return {};
    },
    onResponseError: (_, error) => {
      refusal = error;
      return undefined;
    },
  });
  const response = await server.handleWeb(untilItBreaks(request));
  await store.settled();
  if (refusal instanceof ProblemError && refusal.status === 415)
    await failUpload(owner, uploadId, 'unsupported', refusal.detail);
  if (response.status >= 400) throw await asProblem(response, refusal, limitBytes);
  if (request.method === 'HEAD') await finishResumable(access, owner, uploadId);
  for (const name of [...response.headers.keys()])
    if (name.startsWith('access-control-')) response.headers.delete(name);
  return response;
}

/**
 * The same request, whose body ends where its connection breaks: what arrived is good, and is stored to the last byte. The server
 * would drop what it had not handed on yet.
 */
function untilItBreaks(request: Request): Request {
  if (request.body === null) return request;
  const reader = request.body.getReader();
  const pull = async (controller: ReadableStreamDefaultController<Uint8Array>) => {
    const next = await reader.read().catch(() => ({ done: true as const, value: undefined }));
    if (next.done) controller.close();
    else controller.enqueue(next.value);
  };
  const body = new ReadableStream<Uint8Array>(
    { pull, cancel: (reason) => reader.cancel(reason) },
    { highWaterMark: 0 },
  );
  const { url, method, headers } = request;
  return new Request(url, { method, headers, body, duplex: 'half' } as RequestInit);
}

/** The plant's uploads are made with this right, and gone on with by it. */
async function ownerOf(
  access: Access,
  { plantId, uploadId }: { plantId: string; uploadId?: string },
): Promise<UploadOwner> {
  return withTenant(access, async (em) => {
    const { organizationId } = await requirePlant(em, access, plantId, 'upload.create');
    if (uploadId !== undefined) {
      await requireUpload(em, access, uploadId, 'upload.create');
      const resumable = { id: uploadId, organizationId, plantId, announcedBytes: { $ne: null } };
      if ((await em.count(UploadEntity, resumable)) === 0) throw notFound('upload');
    }
    return { organizationId, plantId, userId: access.userId, tokenId: access.tokenId };
  });
}

/** The protocol's refusals as the rest of the API words its own, with the protocol's headers kept. */
async function asProblem(response: Response, refusal: unknown, limitBytes: number): Promise<ProblemError> {
  const headers = Object.fromEntries([...response.headers].filter(([name]) => /^(tus|upload)-/.test(name)));
  const { status } = response;
  if (status >= 500 && !(refusal instanceof ProblemError)) log.error({ err: refusal }, 'upload.resumable-failed');
  const words = refusal instanceof ProblemError ? refusal : wordsOf(status, await response.text(), limitBytes);
  return problem(words.status, words.title, words.detail, words.errors, { headers });
}

function wordsOf(status: number, text: string, limitBytes: number): ProblemError {
  if (status === 409) return offsetConflict();
  if (status === 410) return uploadEnded();
  if (status === 412)
    return problem(412, 'Precondition failed', 'The request must say Tus-Resumable: 1.0.0, the version spoken here.');
  if (status === 413) {
    const detail = `That is more than the announced Upload-Length, or than ${sizeInWords(limitBytes)}, the limit of one upload.`;
    return problem(413, 'Content too large', detail);
  }
  if (status >= 500)
    return problem(
      500,
      'Internal error',
      'That could not be stored. What was stored before is kept; go on from there.',
    );
  return problem(status, status === 400 ? 'Invalid input' : 'Refused', text.trim());
}
