/** Stand-ins for outside services, in development and tests only; absent everywhere else (checked with the environment at boot). */
export const localFakes = (): boolean => process.env.LOCAL_FAKES === '1';

/** What everything under /dev answers where there are no fakes. */
export const noSuchPage = (): Response => new Response('Not found', { status: 404 });
