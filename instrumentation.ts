/** Next.js calls this once when the server starts, before the first request. */
export async function register(): Promise<void> {
  if (process.env.NEXT_RUNTIME !== 'nodejs' || process.env.NEXT_PHASE === 'phase-production-build') return;
  const { bootWeb } = await import('./lib/http/boot');
  await bootWeb();
}
