import pg from 'pg';
import { lucia } from '@/lib/auth/lucia';
import { newToken, tokenHash } from '@/lib/auth/tokens';
import { closeOrm, configureOrm } from '@/lib/db/orm';
import { log } from '@/lib/log';
import type { Role, TokenScope } from '@/lib/schemas/common';
import { createTestDatabase } from './database';

/** A database of its own behind the real route handlers, with the owner's connection beside it for arranging and looking. */
export interface TestApi {
  owner: pg.Client;
  workerUrl: string;
  appUrl: string;
  close: () => Promise<void>;
}

export async function startTestApi(): Promise<TestApi> {
  log.level = 'silent';
  const database = await createTestDatabase();
  const owner = new pg.Client({ connectionString: database.ownerUrl });
  await owner.connect();
  configureOrm(database.appUrl);
  return {
    owner,
    appUrl: database.appUrl,
    workerUrl: database.workerUrl,
    close: async () => {
      await closeOrm();
      await owner.end();
      await database.drop();
    },
  };
}

let serial = 0;

export async function makeOrganization(api: TestApi, name = `Organization ${++serial}`): Promise<string> {
  const { rows } = await api.owner.query<{ id: string }>(`insert into organization (name) values ($1) returning id`, [
    name,
  ]);
  return rows[0]?.id ?? '';
}

export interface Person {
  userId: string;
  email: string;
  /** Cookie header of a session. */
  cookie: string;
}

/** A person with a session; nobody knows the password. */
export async function makePerson(api: TestApi, roles: readonly (readonly [string, Role])[]): Promise<Person> {
  const email = `person${++serial}@test.example`;
  const { rows } = await api.owner.query<{ id: string }>(
    `insert into app_user (email, name, password_hash) values ($1, $2, 'no password fits') returning id`,
    [email, `Person ${serial}`],
  );
  const userId = rows[0]?.id ?? '';
  for (const [organizationId, role] of roles) {
    await api.owner.query(`insert into membership (organization_id, user_id, role) values ($1, $2, $3)`, [
      organizationId,
      userId,
      role,
    ]);
  }
  const session = await lucia().createSession(userId, {});
  return { userId, email, cookie: `${lucia().sessionCookieName}=${session.id}` };
}

export async function makeToken(
  api: TestApi,
  organizationId: string,
  scope: TokenScope,
  plantId: string | null = null,
): Promise<string> {
  const token = newToken();
  await api.owner.query(
    `insert into api_token (organization_id, plant_id, name, scope, token_hash) values ($1, $2, 'test', $3, $4)`,
    [organizationId, plantId, scope, tokenHash(token)],
  );
  return token;
}

type Handler = (
  request: Request,
  context?: { params: Promise<Record<string, string | string[] | undefined>> },
) => Promise<Response>;

export interface Ask {
  /** Path and query below /api/v1; decides nothing but what the handler reads from the URL. */
  path?: string;
  params?: Record<string, string>;
  /** Sent as JSON. */
  json?: unknown;
  cookie?: string;
  token?: string;
  headers?: Record<string, string>;
}

const ORIGIN = 'http://127.0.0.1:3000';

/** Calls a route handler as a browser (with `cookie`, which brings the Origin along) or a script (with `token`) would. */
export async function ask(handler: Handler, method: string, options: Ask = {}): Promise<Response> {
  const headers = new Headers({ host: '127.0.0.1:3000' });
  if (options.cookie !== undefined) {
    headers.set('cookie', options.cookie);
    headers.set('origin', ORIGIN);
  }
  if (options.token !== undefined) headers.set('authorization', `Bearer ${options.token}`);
  if (options.json !== undefined) headers.set('content-type', 'application/json');
  for (const [name, value] of Object.entries(options.headers ?? {})) headers.set(name, value);
  const request = new Request(`http://localhost:3000/api/v1${options.path ?? '/'}`, {
    method,
    headers,
    ...(options.json === undefined ? {} : { body: JSON.stringify(options.json) }),
  });
  return handler(request, { params: Promise.resolve(options.params ?? {}) });
}

/** The least a plant needs. */
export const LEAST_PLANT = {
  name: 'North energy centre',
  timeZone: 'America/Denver',
  arrangement: 'primary-secondary',
  design: { productionSupplyF: 44, productionUnits: [{ name: 'CH-1', tons: 450, flowGpm: 900 }] },
} as const;
