import { describe, expect, it } from 'vitest';
import type { Access } from '@/lib/auth/access';
import { ACTIONS, can } from '@/lib/auth/can';
import type { Role, TokenScope } from '@/lib/schemas/common';

const HERE = 'a0000000-0000-4000-8000-000000000001';
const THERE = 'a0000000-0000-4000-8000-000000000002';
const access = (role: Role, scope: 'session' | TokenScope = 'session'): Access => ({
  kind: scope === 'session' ? 'session' : 'token',
  userId: null,
  tokenId: null,
  scope,
  ingestPlantId: null,
  onlyPlantId: null,
  memberships: [{ organizationId: HERE, organizationName: 'Here', role }],
  organizationIds: [HERE],
});
const allowed = (who: Access) => ACTIONS.filter((action) => can(who, HERE, action));

describe('what a role may do', () => {
  it('owner: everything', () => {
    expect(allowed(access('owner'))).toEqual([...ACTIONS]);
  });
  it('engineer: everything but members and taking a plant away', () => {
    expect(ACTIONS.filter((action) => !can(access('engineer'), HERE, action))).toEqual([
      'plant.remove',
      'member.manage',
    ]);
  });
  it.each(['consultant', 'operator'] as const)('%s: read and acknowledge', (role) => {
    expect(allowed(access(role))).toEqual(['plant.read', 'upload.read', 'episode.acknowledge']);
  });
  it('nothing in an organization that is not theirs', () => {
    expect(ACTIONS.filter((action) => can(access('owner'), THERE, action))).toEqual([]);
  });
});

describe('what a token may do is decided by its scope', () => {
  it('ingest: upload, name columns, read uploads', () => {
    expect(allowed(access('operator', 'ingest'))).toEqual(['upload.create', 'upload.read', 'mapping.confirm']);
  });
  it('read: read', () => {
    expect(allowed(access('operator', 'read'))).toEqual(['plant.read', 'upload.read']);
  });
  it('manage: what an engineer may, except making tokens', () => {
    const missing = ACTIONS.filter((action) => !can(access('engineer', 'manage'), HERE, action));
    expect(missing).toEqual(['plant.remove', 'token.manage', 'member.manage']);
  });
});
