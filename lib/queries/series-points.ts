import type { EntityManager } from '@mikro-orm/postgresql';
import { query } from '../db/sql';
import { problem } from '../http/problem';
import { RESULT_CHANNELS, type ResultChannel } from '../hydronics/types';
import { POINT_ROLES, pointRole, type PointRoleName } from '../point-roles';
import { STORED_UNIT, TREND_UNITS, type Quantity } from '../units';

/** One requested series: a role of the plant with its feeders, or a channel of the estimates. */
export type SeriesSource =
  | { kind: 'role'; point: string; label: string; quantity: Quantity; pointIds: string[] }
  | { kind: 'channel'; point: string; label: string; quantity: ChannelQuantity; channel: ResultChannel };

export type ChannelQuantity = 'temperature' | 'temperatureDifference' | 'flow' | 'load' | 'share';

/** Codes, not quantities: their mean would mean nothing. `/tide` thins directions. */
const CODES: ReadonlySet<ResultChannel> = new Set(['direction', 'state', 'reason', 'at_odds']);
const MOST_SERIES = 40;

const camelOf = (channel: string): string =>
  channel.replace(/_([a-z0-9])/g, (_, letter: string) => letter.toUpperCase());
const CHANNEL_OF = new Map<string, ResultChannel>(
  RESULT_CHANNELS.filter((channel) => !CODES.has(channel)).map((channel) => [camelOf(channel), channel]),
);

function channelQuantity(channel: ResultChannel): ChannelQuantity {
  if (channel.endsWith('_delta_t_f')) return 'temperatureDifference';
  if (channel.endsWith('_f')) return 'temperature';
  if (channel.endsWith('_gpm')) return 'flow';
  return channel.endsWith('_tons') ? 'load' : 'share';
}

const channelLabel = (channel: ResultChannel): string =>
  channel
    .replace(/_delta_t_f$/, ' delta-T')
    .replace(/_(gpm|f|tons)$/, '')
    .replace(/_lo$/, ', low')
    .replace(/_hi$/, ', high')
    .replaceAll('_', ' ');

interface PointRow {
  id: string;
  role: string;
  unit_index: number;
}

/**
 * The series that a comma-separated list names: a role (`primaryFlow`), a role of one unit (`unitFlow:2`; without the number,
 * one series for each unit that has it), or a channel of the estimates (`bypassFlowGpm`). A role of which the plant has no point
 * is a series without values: not trended is an answer.
 *
 * Throws  a 400 problem that names every word it does not know.
 */
export async function seriesSources(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  list: string,
): Promise<SeriesSource[]> {
  const words = [...new Set(list.split(',').map((word) => word.trim()))].filter((word) => word !== '');
  const errors = words.filter((word) => !isKnown(word)).map((word) => ({ path: 'points', message: unknown(word) }));
  if (words.length === 0) errors.push({ path: 'points', message: 'Name at least one point.' });
  if (words.length > MOST_SERIES)
    errors.push({ path: 'points', message: `Ask for ${MOST_SERIES} points at the most.` });
  if (errors.length > 0)
    throw problem(400, 'Invalid input', `The query is not right: ${errors[0]?.message ?? ''}`, errors);
  const points = await query<PointRow & Record<string, unknown>>(
    em,
    `select id, role, unit_index from point where organization_id = $1 and plant_id = $2 order by role, unit_index, ordinal`,
    [owner.organizationId, owner.plantId],
  );
  return words.flatMap((word) => sourcesOf(word, points));
}

function isKnown(word: string): boolean {
  const [name = '', index] = word.split(':');
  if (index === undefined) return name in POINT_ROLES || CHANNEL_OF.has(name);
  return name in POINT_ROLES && /^\d{1,3}$/.test(index);
}

const unknown = (word: string): string =>
  `"${word}" is neither a point role (such as primaryFlow or unitFlow:2) nor a result (such as bypassFlowGpm).`;

function sourcesOf(word: string, points: readonly PointRow[]): SeriesSource[] {
  const channel = CHANNEL_OF.get(word);
  if (channel) {
    const quantity = channelQuantity(channel);
    return [{ kind: 'channel', point: word, label: channelLabel(channel), quantity, channel }];
  }
  const [name = '', index] = word.split(':');
  const role = pointRole(name as PointRoleName);
  const ofRole = points.filter((point) => point.role === name);
  if (!role.indexed) return [roleSource(word, role.label, role.quantity, ofRole)];
  const indexes = index === undefined ? [...new Set(ofRole.map((point) => point.unit_index))] : [Number(index)];
  return indexes.map((each) =>
    roleSource(
      `${name}:${each}`,
      `${role.label} ${each}`,
      role.quantity,
      ofRole.filter((point) => point.unit_index === each),
    ),
  );
}

const roleSource = (point: string, label: string, quantity: Quantity, feeders: readonly PointRow[]): SeriesSource => ({
  kind: 'role',
  point,
  label,
  quantity,
  pointIds: feeders.map(({ id }) => id),
});

/** The unit a series is kept in, as a label. */
export function storedUnitLabel(source: SeriesSource): string {
  if (source.kind === 'role') return TREND_UNITS[STORED_UNIT[source.quantity]].label;
  const labels: Readonly<Record<ChannelQuantity, string>> = {
    temperature: '°F',
    temperatureDifference: '°F',
    flow: 'gpm',
    load: 'tons',
    share: '',
  };
  return labels[source.quantity];
}
