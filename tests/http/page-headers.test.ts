import { createHash } from 'node:crypto';
import { readFile } from 'node:fs/promises';
import { describe, expect, it } from 'vitest';
import { contentSecurityPolicy, pageHeaders, TOAST_STYLE_HASHES } from '@/lib/http/page-headers';

const production = { nonce: 'bm9uY2U=', https: true, development: false };

describe('the content security policy', () => {
  it('admits scripts by nonce and neither inline nor evaluated ones', () => {
    const policy = contentSecurityPolicy(production);
    const scripts = policy.split('; ').find((part) => part.startsWith('script-src')) ?? '';
    expect(scripts).toContain(`'nonce-bm9uY2U='`);
    expect(scripts).not.toMatch(/unsafe/);
    expect(policy).toContain(`frame-ancestors 'none'`);
    expect(policy).toContain('upgrade-insecure-requests');
  });
  it('does not send a plain http installation to https', () => {
    expect(contentSecurityPolicy({ ...production, https: false })).not.toContain('upgrade-insecure-requests');
    expect(pageHeaders({ ...production, https: false })).not.toHaveProperty('strict-transport-security');
  });
  it('knows the style text of the installed toast library', async () => {
    const source = await readFile('node_modules/sonner/dist/index.mjs', 'utf8');
    const text = /^__insertCSS\((".*")\);?$/m.exec(source)?.[1] ?? '""';
    const hash = (style: string) => createHash('sha256').update(style).digest('base64');
    expect([hash(JSON.parse(text) as string), hash('')]).toEqual([...TOAST_STYLE_HASHES]);
  });
});
