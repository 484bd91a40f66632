import { refusal } from './api';

/**
 * Sends files of one drop as one upload and reports how much has left this browser, 0 to 1. XMLHttpRequest, because fetch does
 * not tell how far a request body has gone. Throws ApiError; rejects with AbortError when `signal` stops it.
 */
export function sendUpload(
  plantId: string,
  files: readonly File[],
  onProgress: (share: number) => void,
  signal: AbortSignal,
): Promise<{ id: string; status: string }> {
  const form = new FormData();
  for (const file of files) form.append('file', file, file.name);
  return new Promise((resolve, reject) => {
    const request = new XMLHttpRequest();
    request.open('POST', `/api/v1/plants/${plantId}/uploads`);
    request.responseType = 'text';
    request.upload.onprogress = (event) => {
      if (event.lengthComputable) onProgress(event.loaded / event.total);
    };
    request.onload = () => {
      const body = () => Promise.resolve().then(() => JSON.parse(request.responseText) as unknown);
      if (request.status >= 200 && request.status < 300) {
        resolve(JSON.parse(request.responseText) as { id: string; status: string });
      } else {
        refusal(request.status, request.getResponseHeader('retry-after'), body).then(reject, reject);
      }
    };
    request.onerror = () => {
      refusal(0, null, () => Promise.reject(new Error('no answer'))).then(reject, reject);
    };
    request.onabort = () => reject(new DOMException('The upload was stopped.', 'AbortError'));
    signal.addEventListener('abort', () => request.abort(), { once: true });
    request.send(form);
  });
}
