/** The style element that the toast library fills with its own text: sha256 of the text, and of the element while still empty. */
export const TOAST_STYLE_HASHES = [
  'StEaX+se6YS7pqjzrzMIA0KaX9zF/8zAhvQXZAe5epY=',
  '47DEQpj8HBSa+/TImW+5JCeuQeRkm5NMpJWZG3hSuFU=',
] as const;

export interface PageContext {
  nonce: string;
  https: boolean;
  development: boolean;
}

/**
 * The content security policy of pages. Scripts and style elements need the request's nonce; style attributes are allowed, because
 * charts and popovers place things with them. Development alone evaluates code and opens a socket, for reloading.
 */
export function contentSecurityPolicy({ nonce, https, development }: PageContext): string {
  const hashes = TOAST_STYLE_HASHES.map((hash) => `'sha256-${hash}'`).join(' ');
  return [
    `default-src 'self'`,
    `script-src 'self' 'nonce-${nonce}' 'strict-dynamic'${development ? ` 'unsafe-eval'` : ''}`,
    development ? `style-src-elem 'self' 'unsafe-inline'` : `style-src-elem 'self' 'nonce-${nonce}' ${hashes}`,
    `style-src-attr 'unsafe-inline'`,
    `img-src 'self' data: blob:`,
    `font-src 'self'`,
    `connect-src 'self'${development ? ' ws:' : ''}`,
    `object-src 'none'`,
    `base-uri 'none'`,
    `form-action 'self'`,
    `frame-ancestors 'none'`,
    ...(https ? ['upgrade-insecure-requests'] : []),
  ].join('; ');
}

/** Every header a page is sent with beyond what Next.js sets. */
export function pageHeaders(context: PageContext): Record<string, string> {
  return {
    'content-security-policy': contentSecurityPolicy(context),
    'x-content-type-options': 'nosniff',
    'x-frame-options': 'DENY',
    // Links in mails carry a signed token in their path: no other site is to learn it.
    'referrer-policy': 'same-origin',
    'permissions-policy': 'camera=(), geolocation=(), microphone=(), payment=(), usb=()',
    'cross-origin-opener-policy': 'same-origin',
    ...(context.https ? { 'strict-transport-security': 'max-age=31536000' } : {}),
  };
}
