import { afterEach, describe, expect, it, vi } from 'vitest';
import { requireSameOrigin } from '@/lib/http/same-origin';

const ask = (method: string, headers: Record<string, string>) =>
  new Request('http://localhost:3000/api/v1/plants', { method, headers });
const refused = (request: Request, shown: 'nothing' | 'cookie' | 'bearer') => {
  try {
    requireSameOrigin(request, shown);
    return false;
  } catch {
    return true;
  }
};
afterEach(() => vi.unstubAllEnvs());

describe('a change made with the cookie', () => {
  it('without an Origin is refused', () => {
    expect(refused(ask('POST', { host: '127.0.0.1:3000' }), 'cookie')).toBe(true);
  });
  it('from the host it was sent to passes, whatever the server calls itself', () => {
    expect(refused(ask('POST', { host: '127.0.0.1:3000', origin: 'http://127.0.0.1:3000' }), 'cookie')).toBe(false);
  });
  it.each(['http://127.0.0.1:4000', 'https://elsewhere.example', 'null', 'http://localhost:3000'])(
    'from %s is refused when the host is 127.0.0.1:3000',
    (origin) => {
      expect(refused(ask('POST', { host: '127.0.0.1:3000', origin }), 'cookie')).toBe(true);
    },
  );
  it('behind https counts the public address alone', () => {
    vi.stubEnv('PUBLIC_URL', 'https://slackwater.example');
    expect(refused(ask('PUT', { host: 'internal:3000', origin: 'https://slackwater.example' }), 'cookie')).toBe(false);
    expect(refused(ask('PUT', { host: 'slackwater.example', origin: 'http://slackwater.example' }), 'cookie')).toBe(
      true,
    );
    expect(refused(ask('PUT', { host: 'internal:3000', origin: 'https://internal:3000' }), 'cookie')).toBe(true);
  });
});

describe('what needs no Origin', () => {
  it('is reading', () => {
    expect(refused(ask('GET', { origin: 'https://elsewhere.example' }), 'cookie')).toBe(false);
  });
  it('is a Bearer token, which no browser sends on its own', () => {
    expect(refused(ask('POST', { origin: 'https://elsewhere.example' }), 'bearer')).toBe(false);
  });
  it('is a script that shows nothing; a page of another site that shows nothing is still refused', () => {
    expect(refused(ask('POST', {}), 'nothing')).toBe(false);
    expect(refused(ask('POST', { origin: 'https://elsewhere.example', host: 'localhost:3000' }), 'nothing')).toBe(true);
  });
});
