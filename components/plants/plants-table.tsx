'use client';
import Link from 'next/link';
import { useRouter } from 'next/navigation';
import type { ReactNode } from 'react';
import { TideStripSmall } from '@/components/charts/tide-strip-small';
import { plantPath } from '@/components/shell/tabs';
import { useFormat } from '@/components/shell/units-context';
import { HeadCell, Cell, RowHead } from '@/components/ui/table';
import { Tag } from '@/components/ui/tag';
import { useRowKeys } from '@/components/ui/use-row-keys';
import { formatHoursMinutes, formatMoney, formatNumber, MISSING } from '@/lib/client/format';
import { addLocalDays, formatDayTime, localDayStarts, momentMs } from '@/lib/client/format-time';
import type { OverviewPlant } from '@/lib/schemas/overview';
import type { Tide } from '@/lib/schemas/results';

const tideOf = (plant: OverviewPlant): Tide => ({
  from: plant.firstDay,
  to: addLocalDays(plant.lastDay, 1),
  barMinutes: 60,
  stepMinutes: 60,
  bars: plant.bars,
});

/** A real table on a desk; a block a plant on a phone, from the same rows. */
export function PlantsTable({ plants }: { plants: readonly OverviewPlant[] }) {
  const body = useRowKeys({ next: 'ArrowDown', previous: 'ArrowUp' });
  const router = useRouter();
  const first = plants[0];
  return (
    <table className="table phone:block" data-ruled data-hover>
      <caption className="sr-only">Plants, in the chosen order, with their last seven days</caption>
      <thead className="phone:sr-only">
        <tr>
          <HeadCell className="w-[34px]">
            <span className="sr-only">rank</span>
          </HeadCell>
          <HeadCell className="w-[180px] text-ink!">
            <b>plant</b>
          </HeadCell>
          <HeadCell className="w-[338px]">
            tide, seven days
            {first ? <DayHeads plant={first} /> : null}
          </HeadCell>
          <HeadCell>why it stands here</HeadCell>
          <HeadCell numeric>
            reverse
            <br />
            yesterday
            <br />
            h:min
          </HeadCell>
          <HeadCell numeric>
            largest
            <br />
            <Unit of="flow" />
          </HeadCell>
          <HeadCell numeric>
            warmest
            <br />
            supply
            <br />
            <Unit of="temperature" />
          </HeadCell>
          <HeadCell numeric>
            low delta-T
            <br />
            hours,
            <br />
            week
          </HeadCell>
          <HeadCell numeric>
            delta-T
            <br />
            load / prod.
            <br />
            <Unit of="temperatureDifference" />
          </HeadCell>
          <HeadCell numeric>
            cost,
            <br />
            week
          </HeadCell>
          <HeadCell numeric>
            data
            <br />
            through
          </HeadCell>
          <HeadCell numeric>
            open
            <br />
            episodes
          </HeadCell>
        </tr>
      </thead>
      <tbody ref={body} className="phone:block">
        {plants.map((plant, index) => (
          <PlantRow key={plant.id} plant={plant} position={index + 1} onOpen={() => router.push(plantPath(plant.id))} />
        ))}
      </tbody>
    </table>
  );
}

function Unit({ of }: { of: 'flow' | 'temperature' | 'temperatureDifference' }) {
  return useFormat().unit(of);
}

function DayHeads({ plant }: { plant: OverviewPlant }) {
  const starts = localDayStarts(
    momentMs(plant.firstDay, plant.timeZone),
    momentMs(addLocalDays(plant.lastDay, 1), plant.timeZone),
    plant.timeZone,
  );
  const weekday = new Intl.DateTimeFormat('en-GB', { timeZone: plant.timeZone, weekday: 'short' });
  return (
    <span aria-hidden="true" className="mt-1 flex w-[322px]">
      {starts.map((start) => (
        <span key={start} className="flex-1">
          {weekday.format(start)}
        </span>
      ))}
    </span>
  );
}

function PlantRow({ plant, position, onOpen }: { plant: OverviewPlant; position: number; onOpen: () => void }) {
  const print = useFormat();
  const { yesterday, week } = plant;
  const stale = plant.ground === 'silence';
  const cost = week.excessCost === null ? MISSING : formatMoney(week.excessCost, 'week');
  return (
    <tr
      className="cursor-pointer phone:grid phone:grid-cols-[34px_minmax(0,1fr)_auto] phone:border-b phone:border-rule phone:py-3.5 phone:[&>*]:border-0! phone:[&>*]:p-0!"
      onClick={(event) => {
        if (!(event.target as HTMLElement).closest('a')) onOpen();
      }}
    >
      <td className="font-serif text-[24px] leading-7 font-medium align-middle! phone:col-start-1 phone:row-start-1">
        {position}
      </td>
      <RowHead className="align-middle! phone:col-start-2 phone:row-start-1">
        <Link href={plantPath(plant.id)} className="link text-[15px] font-semibold">
          {plant.name}
        </Link>
        <span className="block text-ink-2">{plant.organizationName}</span>
      </RowHead>
      <td className="align-middle! phone:col-span-3 phone:row-start-2 phone:pt-2!">
        <div className="w-[322px] phone:w-full">
          <TideStripSmall
            tide={tideOf(plant)}
            from={plant.firstDay}
            to={addLocalDays(plant.lastDay, 1)}
            timeZone={plant.timeZone}
            designFlowGpm={plant.designFlowGpm}
          />
        </div>
      </td>
      <td className="max-w-[210px] align-middle! text-ink-2 phone:col-span-3 phone:max-w-none">{plant.why}</td>
      <Cell numeric className="align-middle! font-semibold phone:hidden">
        {yesterday ? formatHoursMinutes(yesterday.reverseMinutes) : MISSING}
      </Cell>
      <Cell numeric className="align-middle! phone:hidden">
        {yesterday?.largestReverseFlowGpm == null ? MISSING : print.bypass(-yesterday.largestReverseFlowGpm)}
      </Cell>
      <Cell numeric className="align-middle! phone:hidden">
        {print.temperature(yesterday?.warmestSupplyF)}
      </Cell>
      <Cell numeric className="align-middle! phone:hidden">
        {formatNumber(week.lowHours)}
      </Cell>
      <Cell numeric className="align-middle! phone:hidden">
        {print.deltaT(week.deltaTF)} <span className="text-ink-3">/</span> {print.deltaT(week.productionDeltaTF)}
      </Cell>
      <Cell numeric className="align-middle! font-semibold phone:col-start-3 phone:row-start-1">
        {cost}
        {plant.currency && cost !== MISSING ? (
          <span className="text-micro font-normal text-ink-3"> {plant.currency}</span>
        ) : null}
      </Cell>
      <Cell numeric className="align-middle! phone:hidden">
        <Through plant={plant} stale={stale} />
      </Cell>
      <Cell numeric className="align-middle! phone:hidden">
        {plant.openEpisodes === 0 ? MISSING : plant.openEpisodes}
      </Cell>
      <td className="hidden phone:col-span-3 phone:mt-2 phone:block">
        <dl className="grid grid-cols-4 text-small">
          <Fact term="reverse yesterday">{yesterday ? formatHoursMinutes(yesterday.reverseMinutes) : MISSING}</Fact>
          <Fact term="warmest supply">{print.temperature(yesterday?.warmestSupplyF)}</Fact>
          <Fact term="low hours, week">{formatNumber(week.lowHours)}</Fact>
          <Fact term="data through">
            <Through plant={plant} stale={stale} />
          </Fact>
        </dl>
      </td>
    </tr>
  );
}

function Fact({ term, children }: { term: string; children: ReactNode }) {
  return (
    <div>
      <dt className="text-micro text-ink-3">{term}</dt>
      <dd className="font-semibold">{children}</dd>
    </div>
  );
}

function Through({ plant, stale }: { plant: OverviewPlant; stale: boolean }) {
  if (plant.dataThrough === null) return MISSING;
  const words = formatDayTime(Date.parse(plant.dataThrough), plant.timeZone);
  return stale ? <Tag variant="reversed">{words}</Tag> : words;
}
