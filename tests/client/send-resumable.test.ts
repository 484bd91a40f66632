import type { DetailedError, HttpRequest, HttpResponse, UploadOptions } from 'tus-js-client';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import { isPassing, isResumable, RESUMABLE_ABOVE_BYTES, sendResumable } from '@/lib/client/send-resumable';

/** The package's own upload, of which only the wishes are looked at. */
const made: { options: UploadOptions; resumedFrom: string | null; endedOnServer: boolean }[] = [];
let earlier: { creationTime: string; uploadUrl: string }[] = [];
vi.mock('tus-js-client', () => ({
  Upload: class {
    private readonly entry;
    constructor(_: File, options: UploadOptions) {
      this.entry = { options, resumedFrom: null as string | null, endedOnServer: false };
      made.push(this.entry);
    }
    findPreviousUploads = () => Promise.resolve(earlier);
    resumeFromPreviousUpload = (from: { uploadUrl: string }) => (this.entry.resumedFrom = from.uploadUrl);
    start = () => undefined;
    abort = async (ends: boolean) => {
      this.entry.endedOnServer = ends;
    };
  },
}));
beforeEach(() => {
  made.length = 0;
  earlier = [];
});

const file = new File(['Time,V\n'], 'year.csv');
const answer = (status: number, body = ''): HttpResponse =>
  ({ getStatus: () => status, getHeader: () => undefined, getBody: () => body }) as unknown as HttpResponse;
const asked = (method: string): HttpRequest => ({ getMethod: () => method }) as unknown as HttpRequest;
const failed = (originalResponse: HttpResponse | null): DetailedError =>
  Object.assign(new Error('tus'), { originalResponse }) as unknown as DetailedError;

const begin = async (signal = new AbortController().signal) => {
  const shares: number[] = [];
  const done = sendResumable('p1', file, (share) => shares.push(share), signal);
  done.catch(() => undefined);
  await vi.waitFor(() => expect(made).toHaveLength(1));
  await Promise.resolve();
  const [entry] = made;
  if (!entry) throw new Error('nothing was begun');
  return { done, shares, entry, options: entry.options };
};

describe('which way a drop goes', () => {
  it.each([
    ['one file just above 64 MB goes on after a break', [RESUMABLE_ABOVE_BYTES + 1], true],
    ['one of 64 MB goes in a form', [64 * 1024 * 1024], false],
    ['several go in one form, whatever their sizes', [RESUMABLE_ABOVE_BYTES + 1, 10], false],
    ['nothing goes nowhere', [], false],
  ])('%s', (_, sizes, resumable) => {
    expect(isResumable(sizes.map((size) => ({ size })))).toBe(resumable);
  });
});

describe('a large file on its way', () => {
  it('is tried again after no answer, a passing trouble or another sender, and not after a refusal', () => {
    expect([0, 409, 429, 500, 502, 503].every(isPassing)).toBe(true);
    expect([400, 401, 403, 404, 410, 413, 415].some(isPassing)).toBe(false);
  });

  it('goes on from the latest of its earlier sendings', async () => {
    earlier = [
      { creationTime: 'Mon Nov 30 2026 10:00:00 GMT+0000', uploadUrl: '/earlier' },
      { creationTime: 'Tue Dec 01 2026 09:00:00 GMT+0000', uploadUrl: '/latest' },
    ];
    const { entry } = await begin();
    await vi.waitFor(() => expect(entry.resumedFrom).toBe('/latest'));
  });

  it('tells its share, and ends well with the package', async () => {
    const { options, shares, done } = await begin();
    options.onProgress?.(3, 4);
    options.onSuccess?.({ lastResponse: answer(204) });
    await done;
    expect(shares).toEqual([0.75]);
  });

  it.each([401, 403, 429, 502])(
    'is not begun anew when the question how far it has come is answered %i',
    async (status) => {
      const { options } = await begin();
      expect(() => options.onAfterResponse?.(asked('HEAD'), answer(status))).toThrow();
      expect(options.onShouldRetry?.(failed(null), 0, options)).toBe(status === 429 || status === 502);
    },
  );

  it.each([404, 410, 200])('is begun anew, or goes on, when that question is answered %i', async (status) => {
    const { options } = await begin();
    expect(() => options.onAfterResponse?.(asked('HEAD'), answer(status))).not.toThrow();
  });

  it('fails with the server’s own words, or with how to go on when there was no answer', async () => {
    const refused = await begin();
    const words = { type: 'about:blank', title: 'No', status: 415, detail: '"plan.pdf" is a PDF.', instance: 'urn:x' };
    refused.options.onError?.(failed(answer(415, JSON.stringify(words))));
    await expect(refused.done).rejects.toMatchObject({ status: 415, message: '"plan.pdf" is a PDF.' });
    made.length = 0;
    const lost = await begin();
    lost.options.onError?.(failed(null));
    await expect(lost.done).rejects.toThrow(/drop the same file again/);
  });

  it('ends on the server too when it is stopped', async () => {
    const stop = new AbortController();
    const { done, entry } = await begin(stop.signal);
    stop.abort();
    await expect(done).rejects.toMatchObject({ name: 'AbortError' });
    expect(entry.endedOnServer).toBe(true);
  });
});
