import type { Metadata } from 'next';
import { notFound } from 'next/navigation';
import { HourPage } from '@/components/hours/hour-page';
import { Hydrated } from '@/lib/client/hydrate';
import { plantQuery } from '@/lib/client/queries';
import { formatHourTitle } from '@/lib/client/format-time';
import { pagePlant } from '@/lib/queries/page-plant';

interface Props {
  params: Promise<{ plantId: string; hourStart: string }>;
}

/** The hour in the address as an instant; anything else is no page. */
function instantOf(segment: string): string {
  const text = decodeURIComponent(segment);
  const ms = Date.parse(text);
  if (!/^\d{4}-\d{2}-\d{2}T/.test(text) || Number.isNaN(ms)) notFound();
  return new Date(ms).toISOString();
}

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  const { plant } = await pagePlant(params);
  return { title: formatHourTitle(instantOf((await params).hourStart), plant.timeZone) };
}

export default async function HourRoute({ params }: Props) {
  const { plant } = await pagePlant(params);
  return (
    <Hydrated data={[[plantQuery(plant.id).queryKey, plant]]}>
      <HourPage plantId={plant.id} hourStart={instantOf((await params).hourStart)} />
    </Hydrated>
  );
}
