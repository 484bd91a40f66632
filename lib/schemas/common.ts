import { z } from 'zod';

export const ROLES = ['owner', 'engineer', 'consultant', 'operator'] as const;
export type Role = (typeof ROLES)[number];
export const TOKEN_SCOPES = ['ingest', 'read', 'manage'] as const;
export type TokenScope = (typeof TOKEN_SCOPES)[number];

/** A local calendar day of the plant's time zone. */
export const LocalDay = z.iso.date();
/** An instant with any offset, or a local day: `from` and `to` of a period take either. */
export const Moment = z.union([z.iso.datetime({ offset: true }), LocalDay]);
export const UnitSystem = z.enum(['ip', 'si']);

export const Period = z.object({ from: Moment.optional(), to: Moment.optional() });
export const Paging = z.object({
  limit: z.coerce.number().int().min(1).max(500).default(50),
  cursor: z.string().max(400).optional(),
});
export const PlantParams = z.object({ plantId: z.uuid() });
export const UploadParams = z.object({ uploadId: z.uuid() });

/** RFC 9457, application/problem+json. */
export const Problem = z.object({
  type: z.string(),
  title: z.string(),
  status: z.number().int(),
  detail: z.string(),
  instance: z.string(),
  errors: z.array(z.object({ path: z.string(), message: z.string() })).optional(),
});

export const listOf = <Item extends z.ZodType>(item: Item) =>
  z.object({ items: z.array(item), nextCursor: z.string().nullable() });

/** IANA name, checked against what this machine's Intl knows. */
export const TimeZone = z.string().refine(
  (value) => {
    try {
      new Intl.DateTimeFormat('en', { timeZone: value });
      return value.includes('/') || value === 'UTC';
    } catch {
      return false;
    }
  },
  { error: 'Give an IANA time zone such as "America/Denver".' },
);
