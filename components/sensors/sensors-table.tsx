'use client';
import Link from 'next/link';
import { useMemo } from 'react';
import { Whisker } from '@/components/charts/whisker';
import { plantPath } from '@/components/shell/tabs';
import { useUnits } from '@/components/shell/units-context';
import { Cell, HeadCell, RowHead, Table } from '@/components/ui/table';
import { Tag } from '@/components/ui/tag';
import { useRowKeys } from '@/components/ui/use-row-keys';
import { queryString } from '@/lib/client/api';
import {
  formatNumber,
  formatPercent,
  MISSING,
  NO_BREAK_SPACE,
  toPrinted,
  unitLabel,
  type UnitSystem,
} from '@/lib/client/format';
import { formatPeriod, localDayStarts } from '@/lib/client/format-time';
import { sensorError, sensorEvidence, sensorName } from '@/lib/client/sensor-words';
import type { Sensor } from '@/lib/schemas/sensors';
import { roundReach } from './sensors-words';
import { StretchKey, StretchLine, stretchWords } from './stretch-line';

/** Ends of the shared axis, in printed degrees and in percent. */
const DEGREE_STEPS = [0.5, 1, 2, 3, 5, 10, 20];
const PERCENT_STEPS = [2, 4, 6, 10, 20, 50];
const WHISKER_PX = 150;

export interface SensorsTableProps {
  plantId: string;
  timeZone: string;
  sensors: readonly Sensor[];
  /** The period as asked for: local days, and its ends in epoch ms. */
  period: { from: string; to: string; fromMs: number; toMs: number };
}

/** Half of the shared axis: degrees and percent share the zero and nothing else. */
function reaches(sensors: readonly Sensor[], units: UnitSystem): { degrees: number; percent: number } {
  const most = (kind: 'offset' | 'gain') =>
    Math.max(
      0,
      ...sensors.flatMap((sensor) => {
        const error = sensor.kind === kind ? sensorError(sensor) : null;
        if (!error) return [];
        const size = Math.max(Math.abs(error.lo), Math.abs(error.hi));
        return [kind === 'gain' ? size : toPrinted(size, 'temperatureDifference', units)];
      }),
    );
  return { degrees: roundReach(most('offset'), DEGREE_STEPS), percent: roundReach(most('gain'), PERCENT_STEPS) };
}

/** A sensor a row: what it likely reads too high, the evidence, when it failed, and what the answer did with it. */
export function SensorsTable({ plantId, timeZone, sensors, period }: SensorsTableProps) {
  const { units } = useUnits();
  const body = useRowKeys();
  const reach = reaches(sensors, units);
  const days = useMemo(
    () => localDayStarts(period.fromMs, period.toMs, timeZone),
    [period.fromMs, period.toMs, timeZone],
  );
  const span = formatPeriod(period.fromMs, period.toMs, timeZone).replace(/\s\d{4}$/u, '');
  const evidence = `${plantPath(plantId)}${queryString({ from: period.from, to: period.to })}`;
  return (
    <>
      <Table
        caption="Sensors: likely error, evidence, stretches and use"
        dense
        className="[&_tbody_:is(th,td)]:align-middle phone:block phone:[&_tbody]:block"
      >
        <thead className="phone:sr-only">
          <tr>
            <HeadCell className="w-[170px]">sensor</HeadCell>
            <HeadCell className="w-[160px]">
              <AxisWords reach={reach} units={units} />
            </HeadCell>
            <HeadCell numeric>likely</HeadCell>
            <HeadCell numeric>90 %</HeadCell>
            <HeadCell className="pl-5!">evidence</HeadCell>
            <HeadCell className="w-[240px]">stretches, {span}</HeadCell>
            <HeadCell numeric>coverage</HeadCell>
            <HeadCell className="whitespace-nowrap">in the answer</HeadCell>
          </tr>
        </thead>
        <tbody ref={body}>
          {sensors.map((sensor) => (
            <Row
              key={`${sensor.role}/${sensor.unitIndex}`}
              {...{ sensor, reach, units, days, evidence }}
              fromMs={period.fromMs}
              toMs={period.toMs}
            />
          ))}
        </tbody>
      </Table>
      <p className="mt-3 hidden text-small text-ink-2 phone:block">
        Left: offset, ±{formatNumber(reach.degrees, { decimals: reach.degrees < 1 ? 1 : 0 })}
        {NO_BREAK_SPACE}
        {unitLabel('temperatureDifference', units)} or ±{formatNumber(reach.percent)}
        {NO_BREAK_SPACE}% at the ends. Right: stretches, {span}.
      </p>
      <StretchKey />
    </>
  );
}

/** The two scales over the whiskers. */
function AxisWords({ reach, units }: { reach: { degrees: number; percent: number }; units: UnitSystem }) {
  const scale = (ends: number, unit: string) => (
    <span className="grid grid-cols-3" style={{ width: WHISKER_PX }}>
      <span>{formatNumber(-ends, { decimals: ends < 1 ? 1 : 0 })}</span>
      <span className="text-center">0</span>
      <span className="text-end whitespace-nowrap">
        {formatNumber(ends, { decimals: ends < 1 ? 1 : 0, sign: 'always' })}
        {NO_BREAK_SPACE}
        {unit}
      </span>
    </span>
  );
  return (
    <>
      <span className="sr-only">drawing</span>
      <span aria-hidden="true">
        {scale(reach.degrees, unitLabel('temperatureDifference', units))}
        {scale(reach.percent, '%')}
      </span>
    </>
  );
}

interface RowProps {
  sensor: Sensor;
  reach: { degrees: number; percent: number };
  units: UnitSystem;
  days: readonly number[];
  fromMs: number;
  toMs: number;
  evidence: string;
}

function Row({ sensor, reach, units, days, fromMs, toMs, evidence }: RowProps) {
  const error = sensorError(sensor);
  const never = sensor.points.length === 0 && sensor.kind === null;
  const printed = (value: number) =>
    sensor.kind === 'gain' ? value : toPrinted(value, 'temperatureDifference', units);
  const figure = (value: number, sign: 'auto' | 'always' = 'always') =>
    formatNumber(printed(value), { decimals: 1, sign });
  const unit = sensor.kind === 'gain' ? '%' : unitLabel('temperatureDifference', units);
  const end = sensor.kind === 'gain' ? reach.percent : reach.degrees;
  const isCorrected = sensor.use === 'corrected';
  const interval = error ? `${figure(error.lo)} to ${figure(error.hi)}` : '';
  return (
    <tr
      data-selected={isCorrected}
      className="phone:grid phone:grid-cols-12 phone:items-center phone:gap-x-2 phone:border-b phone:border-grid phone:py-2.5 phone:[&>*]:border-0! phone:[&>*]:p-0!"
    >
      <RowHead className={error ? 'phone:col-span-5' : 'phone:col-span-10'}>
        <Link href={evidence} className="block font-semibold hover:underline">
          {sensorName(sensor.role, sensor.unitIndex)}
        </Link>
        <span
          className="block max-w-[170px] truncate text-small font-normal text-ink-2 phone:hidden"
          title={sensor.points.join(', ')}
        >
          {sensor.points.length === 0 ? MISSING : sensor.points.join(', ')}
        </span>
      </RowHead>
      <td className="phone:order-3 phone:col-span-6">
        <Whisker
          lo={error ? printed(error.lo) : 0}
          hi={error ? printed(error.hi) : 0}
          mid={error ? printed(error.value) : undefined}
          empty={error === null}
          domain={[-end, end]}
          grid={[-end, -end / 2, end / 2, end]}
          width={WHISKER_PX}
          height={26}
        />
      </td>
      <Cell
        numeric
        className={`whitespace-nowrap phone:order-2 phone:text-end ${error ? 'phone:col-span-7' : 'phone:col-span-2'}`}
      >
        {error ? (
          <>
            <b>{figure(error.value)}</b>
            <span className="text-micro text-ink-3">
              {NO_BREAK_SPACE}
              {unit}
            </span>
            <span className="hidden text-ink-2 phone:inline"> ({interval})</span>
          </>
        ) : (
          MISSING
        )}
      </Cell>
      <Cell numeric className="whitespace-nowrap text-ink-2 phone:hidden">
        {interval}
      </Cell>
      <td
        className={`min-w-[220px] pl-5! text-small text-pretty phone:order-5 phone:text-base phone:col-span-9 phone:min-w-0 ${isCorrected ? '' : 'text-ink-2'}`}
      >
        {sensorEvidence(sensor, units)}
      </td>
      <td className="phone:order-4 phone:col-span-6">
        <StretchLine
          stretches={sensor.stretches}
          fromMs={fromMs}
          toMs={toMs}
          days={days}
          never={sensor.coverage === null}
        />
        <span className="sr-only">{stretchWords(sensor.stretches, sensor.coverage === null)}</span>
      </td>
      <Cell numeric className={`phone:order-6 phone:col-span-3 ${isCorrected ? 'phone:hidden' : ''}`}>
        {sensor.coverage === null ? (
          MISSING
        ) : (
          <>
            {formatPercent(sensor.coverage)}
            <span className="text-micro text-ink-3">{NO_BREAK_SPACE}%</span>
          </>
        )}
      </Cell>
      <td
        className={`whitespace-nowrap phone:order-7 phone:col-span-3 phone:text-end ${isCorrected ? '' : 'phone:hidden'}`}
      >
        {isCorrected ? <Tag variant="reversed">corrected</Tag> : never ? MISSING : sensor.use}
      </td>
    </tr>
  );
}
