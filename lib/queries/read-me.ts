import type { Access, SignedInUser } from '../auth/access';
import type { Me } from '../schemas/session';

/** The signed-in person as the API shows them. */
export const meOf = (user: SignedInUser, access: Access): Me => ({
  id: user.id,
  email: user.email,
  name: user.name,
  unitSystem: user.unitSystem,
  memberships: access.memberships,
});
