/** The address people open, from PUBLIC_URL (validated at boot); null when it is not set. */
export function publicUrl(): URL | null {
  const text = process.env.PUBLIC_URL?.trim();
  return text === undefined || text === '' ? null : new URL(text);
}

/** True when browsers reach the product over https: the cookie is then Secure and bound to the host. */
export const servedOverHttps = (): boolean => publicUrl()?.protocol === 'https:';
