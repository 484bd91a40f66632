/** The application's secret, which signs the links in mails (validated at boot). Throws when the process has none. */
export function linkSecret(): string {
  const secret = process.env.APP_SECRET;
  if (secret === undefined || secret === '') throw new Error('APP_SECRET is not set: no link can be checked.');
  return secret;
}
