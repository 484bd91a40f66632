import { z } from 'zod';
import { ROLES, TOKEN_SCOPES } from './common';

const Email = z
  .email('Give an e-mail address such as name@example.org.')
  .max(254)
  .transform((value) => value.toLowerCase());

export const SignIn = z.object({ email: Email, password: z.string().min(1, 'Give your password.').max(500) });
export const CreateAccount = z.object({
  organizationName: z.string().trim().min(2, 'Give the name of your organization.').max(120),
  name: z.string().trim().min(1, 'Give your name.').max(120),
  email: Email,
  password: z.string().min(12, 'Choose a password of at least 12 characters.').max(500),
});
export const Membership = z.object({
  organizationId: z.uuid(),
  organizationName: z.string(),
  role: z.enum(ROLES),
});
export const Me = z.object({
  id: z.uuid(),
  email: z.string(),
  name: z.string(),
  unitSystem: z.enum(['ip', 'si']),
  memberships: z.array(Membership),
});
export type Me = z.infer<typeof Me>;

export const CreateToken = z
  .object({
    organizationId: z.uuid().optional(),
    name: z.string().trim().min(1).max(120),
    scope: z.enum(TOKEN_SCOPES),
    plantId: z.uuid().optional(),
    expiresAt: z.iso.datetime({ offset: true }).optional(),
  })
  .refine((token) => token.scope !== 'ingest' || token.plantId !== undefined, {
    path: ['plantId'],
    error: 'A token that uploads belongs to one plant: give plantId.',
  });
export const CreatedToken = z.object({ id: z.uuid(), token: z.string() });
export const Token = z.object({
  id: z.uuid(),
  organizationId: z.uuid(),
  name: z.string(),
  scope: z.enum(TOKEN_SCOPES),
  plantId: z.uuid().nullable(),
  createdAt: z.string(),
  expiresAt: z.string().nullable(),
  lastUsedAt: z.string().nullable(),
});
