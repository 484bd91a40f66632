import type { Role } from '../schemas/common';
import type { Access } from './access';

export const ACTIONS = [
  'plant.read',
  'plant.manage',
  'plant.remove',
  'upload.create',
  'upload.read',
  'mapping.confirm',
  'upload.remove',
  'analysis.start',
  'spot-check.manage',
  'alert.manage',
  'alert.run',
  'episode.acknowledge',
  'token.manage',
  'member.manage',
] as const;
export type Action = (typeof ACTIONS)[number];

const READ: readonly Action[] = ['plant.read', 'upload.read'];
const ROLE_ACTIONS: Readonly<Record<Role, ReadonlySet<Action>>> = {
  owner: new Set(ACTIONS),
  engineer: new Set(ACTIONS.filter((action) => action !== 'member.manage' && action !== 'plant.remove')),
  // Reads everything, remedies and reports included, and says what was seen; what changes the record is the plant's own people's.
  consultant: new Set<Action>([...READ, 'episode.acknowledge']),
  operator: new Set<Action>([...READ, 'episode.acknowledge']),
};
// What takes a person: a key does not make keys or members, and does not take a plant away.
const PERSONAL: readonly Action[] = ['member.manage', 'token.manage', 'plant.remove'];
const SCOPE_ACTIONS: Readonly<Record<'ingest' | 'read' | 'manage', ReadonlySet<Action>>> = {
  // Uploads to one plant and reads what it uploaded; the plant's results are not its business.
  ingest: new Set<Action>(['upload.create', 'upload.read', 'mapping.confirm']),
  read: new Set(READ),
  manage: new Set(ACTIONS.filter((action) => !PERSONAL.includes(action))),
};

/** Whether this person or token may do `action` in that organization; false for an organization that is not theirs. */
export function can(access: Access, organizationId: string, action: Action): boolean {
  const membership = access.memberships.find((each) => each.organizationId === organizationId);
  if (!membership) return false;
  return access.scope === 'session'
    ? ROLE_ACTIONS[membership.role].has(action)
    : SCOPE_ACTIONS[access.scope].has(action);
}
