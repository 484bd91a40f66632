import { describe, expect, it } from 'vitest';
import { cached, entityTag, isCurrent } from '@/lib/http/etag';

const plant = { resultsRevision: 7, settingsRevision: 2 };
const ask = (url: string, tag?: string) =>
  new Request(`http://localhost${url}`, tag === undefined ? {} : { headers: { 'if-none-match': tag } });

describe('weak tags', () => {
  const tag = entityTag(plant, ask('/hours?rank=cost&units=ip'));
  it('are weak and the same whatever the order of the query', () => {
    expect(tag).toMatch(/^W\/"/);
    expect(entityTag(plant, ask('/hours?units=ip&rank=cost'))).toBe(tag);
  });
  it.each([
    ['other results', { ...plant, resultsRevision: 8 }, '/hours?rank=cost&units=ip'],
    ['other settings', { ...plant, settingsRevision: 3 }, '/hours?rank=cost&units=ip'],
    ['other units', plant, '/hours?rank=cost&units=si'],
    ['another route', plant, '/intervals?rank=cost&units=ip'],
  ])('differ for %s', (_, revisions, url) => {
    expect(entityTag(revisions, ask(url))).not.toBe(tag);
  });
  it('are found in a list, with or without the weak mark, and by *', () => {
    expect(isCurrent(ask('/x', `"other", ${tag}`), tag)).toBe(true);
    expect(isCurrent(ask('/x', tag.slice(2)), tag)).toBe(true);
    expect(isCurrent(ask('/x', '*'), tag)).toBe(true);
    expect(isCurrent(ask('/x', '"other"'), tag)).toBe(false);
    expect(isCurrent(ask('/x'), tag)).toBe(false);
  });
});

describe('cached', () => {
  it('answers 304 without making anything when the copy is current', async () => {
    let made = 0;
    const make = async () => ({ made: ++made });
    const first = await cached(ask('/x'), plant, make);
    expect(await first.json()).toEqual({ made: 1 });
    expect(first.headers.get('cache-control')).toBe('private, no-cache');
    const second = await cached(ask('/x', first.headers.get('etag') ?? ''), plant, make);
    expect(second.status).toBe(304);
    expect(await second.text()).toBe('');
    expect(second.headers.get('etag')).toBe(first.headers.get('etag'));
    expect(made).toBe(1);
  });
  it('tags a response that was made elsewhere', async () => {
    const response = await cached(ask('/x'), plant, async () => new Response('a,b', { headers: { 'x-kept': '1' } }));
    expect(response.headers.get('etag')).toMatch(/^W\//);
    expect(response.headers.get('x-kept')).toBe('1');
  });
});
