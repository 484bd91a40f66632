import type { DetailedError, HttpResponse, PreviousUpload } from 'tus-js-client';
import { ApiError, refusal } from './api';

/** A file above this is sent with pauses; a smaller one is sent again faster than it is gone on with. */
export const RESUMABLE_ABOVE_BYTES = 64 * 1024 * 1024;
/** One request's share: below what proxies let pass, and short enough for their clocks. */
const PIECE_BYTES = 32 * 1024 * 1024;
/** Begun anew whenever a piece gets through: a connection may be away for some ten minutes. */
const RETRY_AFTER_MS = [1000, 2000, 5000, 10_000, 20_000, 30_000, ...Array.from({ length: 9 }, () => 60_000)];

const INTERRUPTED =
  'The connection was lost for too long. What has arrived is kept for a day: drop the same file again to go on from there.';

/** Whether a drop is one large file. Several files are one upload together and go in one form, whatever their sizes. */
export const isResumable = (files: readonly { size: number }[]): boolean =>
  files.length === 1 && (files[0]?.size ?? 0) > RESUMABLE_ABOVE_BYTES;

/** Whether to try again: no answer, a passing trouble of the server, or another sender of the same file; no refusal. */
export const isPassing = (status: number): boolean => status === 0 || status === 409 || status === 429 || status >= 500;

/**
 * Sends a large file by the tus protocol and reports how much the server has taken or is being sent, 0 to 1. It goes on after a
 * broken connection, and where it stopped when the same file is dropped again in this browser within a day. Throws ApiError;
 * rejects with AbortError when `signal` stops it, and ends it on the server too.
 */
export async function sendResumable(
  plantId: string,
  file: File,
  onProgress: (share: number) => void,
  signal: AbortSignal,
): Promise<void> {
  const { Upload } = await import('tus-js-client');
  signal.throwIfAborted();
  await new Promise<void>((resolve, reject) => {
    let held: HttpResponse | null = null;
    const answerTo = (error: Error): HttpResponse | null =>
      ('originalResponse' in error ? (error as DetailedError).originalResponse : null) ?? held;
    const upload = new Upload(file, {
      endpoint: `/api/v1/plants/${plantId}/uploads/resumable`,
      metadata: { filename: file.name },
      chunkSize: PIECE_BYTES,
      retryDelays: RETRY_AFTER_MS,
      removeFingerprintOnSuccess: true,
      onBeforeRequest: () => {
        held = null;
      },
      // Whatever it is refused with when it asks how far a file has come, the package begins anew: only right when there is none.
      onAfterResponse: (request, response) => {
        if (request.getMethod() !== 'HEAD' || !holdsOn(response.getStatus())) return;
        held = response;
        throw new Error('The file is still there, but cannot be gone on with now.');
      },
      onShouldRetry: (error) => isPassing(answerTo(error)?.getStatus() ?? 0),
      onProgress: (sentBytes, wholeBytes) => onProgress(sentBytes / Math.max(1, wholeBytes)),
      onSuccess: () => resolve(),
      onError: (error) => {
        failure(answerTo(error)).then(reject, reject);
      },
    });
    signal.addEventListener('abort', () => {
      reject(new DOMException('The upload was stopped.', 'AbortError'));
      // One that cannot be told now is given up by the server after a day.
      upload.abort(true).catch(() => undefined);
    });
    const start = (earlier: PreviousUpload[]) => {
      if (signal.aborted) return;
      const [latest] = earlier.sort((a, b) => Date.parse(b.creationTime) - Date.parse(a.creationTime));
      if (latest) upload.resumeFromPreviousUpload(latest);
      upload.start();
    };
    // Without its notes of earlier uploads (storage switched off) it is sent from the beginning.
    upload.findPreviousUploads().then(start, () => start([]));
  });
}

/** Whether an answer to "how far has it come?" says nothing against the file itself. */
const holdsOn = (status: number): boolean => status >= 300 && status !== 404 && status !== 410;

async function failure(answer: HttpResponse | null): Promise<ApiError> {
  const status = answer?.getStatus() ?? 0;
  if (answer === null || isPassing(status)) return new ApiError(status, INTERRUPTED);
  return refusal(status, answer.getHeader('retry-after') ?? null, async () => JSON.parse(answer.getBody()) as unknown);
}
