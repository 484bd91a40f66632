import { z } from 'zod';
import { listOf, Paging } from '../../schemas/common';
import { UpdateMe } from '../../schemas/me';
import { CreateAccount, CreatedToken, CreateToken, Me, SignIn, Token } from '../../schemas/session';
import { named, type Operation } from './describe';

const MeDocument = named('Me', Me);
const common = { tag: 'People and tokens' } as const;

export const ACCOUNT_OPERATIONS: readonly Operation[] = [
  {
    ...common,
    method: 'post',
    path: '/session',
    summary: 'Sign in: sets the session cookie.',
    who: 'anyone',
    open: true,
    body: SignIn,
    answers: { 204: { description: 'Signed in; Set-Cookie holds the session.' } },
    refusals: [401, 429],
  },
  {
    ...common,
    method: 'delete',
    path: '/session',
    summary: 'Sign out.',
    who: 'anyone',
    open: true,
    answers: { 204: { description: 'Signed out.' } },
  },
  {
    ...common,
    method: 'post',
    path: '/accounts',
    summary: 'Make an account: a person and an organization with that person as owner, signed in.',
    who: 'anyone, unless sign-up is switched off',
    open: true,
    body: CreateAccount,
    idempotent: true,
    answers: { 201: { description: 'Made and signed in.', schema: MeDocument } },
    refusals: [403, 409, 429],
  },
  {
    ...common,
    method: 'get',
    path: '/me',
    summary: 'The signed-in person, memberships with roles, unit preference.',
    who: 'signed in (a person)',
    answers: { 200: { description: 'The person.', schema: MeDocument } },
  },
  {
    ...common,
    method: 'patch',
    path: '/me',
    summary: 'Set the unit preference.',
    who: 'signed in (a person)',
    body: UpdateMe,
    answers: { 200: { description: 'The person.', schema: MeDocument } },
  },
  {
    ...common,
    method: 'get',
    path: '/tokens',
    summary: 'Tokens that have not been revoked, the newest first.',
    who: 'owner, engineer',
    query: Paging,
    answers: { 200: { description: 'A page of tokens.', schema: listOf(named('Token', Token)) } },
  },
  {
    ...common,
    method: 'post',
    path: '/tokens',
    summary: 'Make a token. It is shown in this answer only.',
    who: 'owner, engineer',
    body: CreateToken,
    idempotent: true,
    answers: { 201: { description: 'The token.', schema: CreatedToken } },
  },
  {
    ...common,
    method: 'delete',
    path: '/tokens/{tokenId}',
    summary: 'Revoke a token; it stops working at once.',
    who: 'owner, engineer',
    params: z.object({ tokenId: z.uuid() }),
    answers: { 204: { description: 'Revoked.' } },
  },
];
