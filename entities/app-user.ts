import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A person. The password hash is readable by the sign-in functions only. */
export const AppUserEntity = defineEntity({
  name: 'AppUser',
  tableName: 'app_user',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    email: p.text().unique(),
    name: p.text(),
    passwordHash: p.text().lazy(true, false).hidden(),
    unitSystem: p.text().default('ip'),
    mailSuppressedAt: p.datetime().nullable(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type AppUser = InferEntity<typeof AppUserEntity>;
