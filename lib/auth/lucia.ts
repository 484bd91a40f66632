import { Lucia, TimeSpan } from 'lucia';
import type { SignedInUser } from './access';
import { servedOverHttps } from './public-url';
import { sessionAdapter } from './session-adapter';

type UserAttributes = Omit<SignedInUser, 'id'>;
declare module 'lucia' {
  interface Register {
    Lucia: ReturnType<typeof makeLucia>;
    DatabaseUserAttributes: UserAttributes;
  }
}

function makeLucia(https: boolean) {
  return new Lucia(sessionAdapter, {
    sessionExpiresIn: new TimeSpan(30, 'd'),
    sessionCookie: {
      // The cookie outlives the session: a page view prolongs the session but cannot set cookies. The database decides.
      expires: false,
      // The prefix makes browsers refuse the cookie from a sibling host or over plain http.
      name: https ? '__Host-slackwater_session' : 'slackwater_session',
      attributes: { secure: https, sameSite: 'lax', path: '/' },
    },
    getUserAttributes: ({ email, name, unitSystem }: UserAttributes) => ({ email, name, unitSystem }),
  });
}

let made: { https: boolean; lucia: ReturnType<typeof makeLucia> } | undefined;

/** Sessions and their cookie; made anew when PUBLIC_URL turns from http to https (tests do that, a server does not). */
export function lucia(): ReturnType<typeof makeLucia> {
  const https = servedOverHttps();
  if (made?.https !== https) made = { https, lucia: makeLucia(https) };
  return made.lucia;
}
