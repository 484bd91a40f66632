import type { Role, TokenScope } from '../schemas/common';

export interface AccessMembership {
  organizationId: string;
  organizationName: string;
  role: Role;
}

/** Who asks, and for which organizations: the answer of sign-in, handed to every query and command. */
export interface Access {
  kind: 'session' | 'token';
  /** The person; for a token the person who made it, or null when that person is gone. */
  userId: string | null;
  tokenId: string | null;
  scope: 'session' | TokenScope;
  /** The one plant an `ingest` token may upload to. */
  ingestPlantId: string | null;
  /** The one plant a token of any scope was made for; null = every plant of its organization. */
  onlyPlantId: string | null;
  /** A token has one, with the role its scope amounts to. */
  memberships: AccessMembership[];
  organizationIds: string[];
}

/** The person behind a session, for pages and GET /me. */
export interface SignedInUser {
  id: string;
  email: string;
  name: string;
  unitSystem: 'ip' | 'si';
}
