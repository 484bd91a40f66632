import { query } from '@/lib/db/sql';
import { forbidden, route } from '@/lib/http/route';
import { meOf } from '@/lib/queries/read-me';
import { UpdateMe } from '@/lib/schemas/me';

const notAPerson = () => forbidden('A token is not a person: sign in to see who you are.');

/** GET: the signed-in person, their memberships with roles, their unit preference. */
export const GET = route({}, async ({ user, access }) => {
  if (!user) throw notAPerson();
  return meOf(user, access);
});

/** PATCH: the unit preference. */
export const PATCH = route({ body: UpdateMe }, async ({ em, user, access, body }) => {
  if (!user) throw notAPerson();
  if (body.unitSystem === undefined) return meOf(user, access);
  await query(em, `select auth_set_unit_system($1, $2)`, [user.id, body.unitSystem]);
  return meOf({ ...user, unitSystem: body.unitSystem }, access);
});
