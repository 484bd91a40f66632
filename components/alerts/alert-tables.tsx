import { EmptyState } from '@/components/ui/states';
import { HeadCell, RowHead, Table } from '@/components/ui/table';
import { Tag } from '@/components/ui/tag';
import { MISSING } from '@/lib/client/format';
import { formatDay, formatDayTime, startOfLocalDay } from '@/lib/client/format-time';
import type { Alerts } from '@/lib/schemas/alert';
import { OUTCOME_WORDS } from './alert-words';

const dayWords = (day: string, timeZone: string): string => formatDay(startOfLocalDay(day, timeZone), timeZone);

/** The mails: about which day, to whom, whether it went, who has seen it. */
export function DeliveryTable({ deliveries, timeZone }: { deliveries: Alerts['deliveries']; timeZone: string }) {
  if (deliveries.length === 0)
    return <EmptyState claim="No mail yet.">The first goes out after a day that meets the rule.</EmptyState>;
  return (
    <Table caption="Mails, newest first">
      <thead>
        <tr>
          <HeadCell>about</HeadCell>
          <HeadCell>to</HeadCell>
          <HeadCell>subject</HeadCell>
          <HeadCell>state</HeadCell>
          <HeadCell>seen</HeadCell>
        </tr>
      </thead>
      <tbody>
        {deliveries.map((delivery) => (
          <tr key={delivery.id}>
            <RowHead className="whitespace-nowrap">{dayWords(delivery.day, timeZone)}</RowHead>
            <td className="break-all">{delivery.email}</td>
            <td>{delivery.subject === '' ? MISSING : delivery.subject}</td>
            <td>
              {delivery.status === 'failed' ? (
                <>
                  <Tag variant="reversed">failed</Tag> {delivery.failure}
                </>
              ) : delivery.status === 'sent' && delivery.sentAt !== null ? (
                `sent ${formatDayTime(Date.parse(delivery.sentAt), timeZone)}`
              ) : (
                delivery.status
              )}
            </td>
            <td>
              {delivery.acknowledgedAt === null ? (
                MISSING
              ) : (
                <>
                  {formatDayTime(Date.parse(delivery.acknowledgedAt), timeZone)}{' '}
                  <span className="text-ink-2">by {delivery.acknowledgedBy}</span>
                </>
              )}
            </td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

/** What each day's evaluation came to. */
export function RunTable({ runs, timeZone }: { runs: Alerts['runs']; timeZone: string }) {
  if (runs.length === 0)
    return <EmptyState claim="No day yet.">Each day is evaluated once, at the rule’s time.</EmptyState>;
  return (
    <Table caption="Days evaluated, newest first">
      <thead>
        <tr>
          <HeadCell>day</HeadCell>
          <HeadCell>came to</HeadCell>
          <HeadCell>why</HeadCell>
        </tr>
      </thead>
      <tbody>
        {runs.map((run) => (
          <tr key={run.id} data-outcome={run.outcome}>
            <RowHead className="whitespace-nowrap">{dayWords(run.day, timeZone)}</RowHead>
            <td className="whitespace-nowrap">
              {run.outcome === 'failed' ? (
                <Tag variant="reversed">{OUTCOME_WORDS[run.outcome]}</Tag>
              ) : (
                OUTCOME_WORDS[run.outcome]
              )}
            </td>
            <td>{run.detail}</td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}
