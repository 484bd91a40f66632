'use client';
import { useQuery } from '@tanstack/react-query';
import { CoverageCalendar } from '@/components/charts/coverage-calendar';
import { Section } from '@/components/ui/section';
import { ErrorState, LoadingWords } from '@/components/ui/states';
import { addLocalDays, formatPeriod, localDay, startOfLocalDay } from '@/lib/client/format-time';
import { coverageQuery } from '@/lib/client/queries';
import type { Plant } from '@/lib/schemas/plant';
import type { Upload } from '@/lib/schemas/upload';
import { filesOfDay } from './uploads-words';

/** Days shown: eight weeks that end with the last day of data. */
const SHOWN_DAYS = 56;

/** How much of each day arrived, point by point. */
export function CoverageSection({
  plant,
  uploads,
}: {
  plant: Plant & { dataThrough: string };
  uploads: readonly Upload[];
}) {
  const { timeZone } = plant;
  const to = addLocalDays(localDay(Date.parse(plant.dataThrough), timeZone), 1);
  const from = addLocalDays(to, -SHOWN_DAYS);
  const { data, error, refetch } = useQuery(coverageQuery(plant.id, { from, to }));
  const period = formatPeriod(startOfLocalDay(from, timeZone), startOfLocalDay(to, timeZone), timeZone);
  return (
    <Section
      title="Coverage calendar"
      sub={`${period}; one bar a day, its height the share of the day that arrived; blank is missing`}
      className="mt-7.5"
    >
      {error && !data ? (
        <ErrorState onRetry={() => void refetch()}>{error.message}</ErrorState>
      ) : !data ? (
        <LoadingWords>Counting what arrived.</LoadingWords>
      ) : (
        <CoverageCalendar
          from={data.days[0] ?? from}
          describe={(day) => filesOfDay(uploads, day, timeZone)}
          rows={data.points.map((point) => ({
            key: `${point.role}.${point.unitIndex}.${point.ordinal}`,
            label: point.label,
            days: point.shares,
          }))}
        />
      )}
    </Section>
  );
}
