import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** What a person may do in an organization: owner, engineer, consultant or operator. */
export const MembershipEntity = defineEntity({
  name: 'Membership',
  tableName: 'membership',
  properties: {
    organizationId: p.uuid().primary(),
    userId: p.uuid().primary(),
    role: p.text(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type Membership = InferEntity<typeof MembershipEntity>;
