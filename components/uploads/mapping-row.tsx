'use client';
import { memo, useState } from 'react';
import { ConfidenceBar } from '@/components/charts/confidence-bar';
import { Sparkline } from '@/components/charts/sparkline';
import { Select } from '@/components/ui/select';
import { Cell, RowHead } from '@/components/ui/table';
import { EN_DASH, formatNumber, MISSING } from '@/lib/client/format';
import { IGNORE_ROLE, pointRole, type MappedRole } from '@/lib/point-roles';
import type { Preview } from '@/lib/schemas/upload';
import { TREND_UNITS } from '@/lib/units';
import { furtherWords, isOpen, roleLabel, ROLE_OPTIONS, unitsFor, withRole, type ColumnAnswer } from './mapping-form';

export interface MappingRowProps {
  column: Preview['columns'][number];
  answer: ColumnAnswer;
  clash: string | null;
  /** Points of other files that carry the role already. */
  carried: readonly string[] | null;
  unitCount: number;
  disabled: boolean;
  onChange: (answer: ColumnAnswer) => void;
}

const chosen = <Value extends string>(value: Value | null, label: string): { value: Value; label: string }[] =>
  value === null ? [] : [{ value, label }];

const printed = (value: number | null): string =>
  value === null ? MISSING : formatNumber(value, { decimals: Math.abs(value) >= 100 ? 0 : 1 });

/**
 * One column of the file: the data itself, the role, the unit, why, and how sure. Drawn anew only when something of its own has
 * changed: its lists of choices are the dearest part of the page.
 */
export const MappingRow = memo(function MappingRow({
  column,
  answer,
  clash,
  carried,
  unitCount,
  disabled,
  onChange,
}: MappingRowProps) {
  const { role } = answer;
  // Until someone comes near, each list holds its chosen entry alone: forty rows of full lists take seconds to draw.
  const [awake, setAwake] = useState(false);
  const wake = () => setAwake(true);
  const named = role !== null && role !== IGNORE_ROLE ? pointRole(role) : null;
  const open = isOpen(answer);
  const numbers = Array.from({ length: Math.max(unitCount, answer.unitIndex ?? 1, 1) }, (_, index) =>
    String(index + 1),
  );
  return (
    <tr
      onPointerEnter={wake}
      onFocus={wake}
      data-selected={open}
      data-column={column.column}
      className="[&>*]:align-middle! phone:grid phone:grid-cols-[minmax(0,1fr)_auto] phone:gap-x-3 phone:gap-y-1.5 phone:border-b phone:border-rule phone:px-2 phone:py-3 phone:[&>*]:border-0! phone:[&>*]:p-0!"
    >
      <RowHead className="font-semibold! break-words [overflow-wrap:anywhere] phone:col-start-1 phone:row-start-1">
        {column.column}
      </RowHead>
      <td className="phone:col-span-2 phone:row-start-2">
        <Sparkline values={column.samples} dim={role === IGNORE_ROLE} label={`The values of ${column.column}`} />
      </td>
      <Cell numeric className="text-ink-2 phone:col-start-2 phone:row-start-1">
        {column.low === null ? MISSING : `${printed(column.low)} ${EN_DASH} ${printed(column.high)}`}
      </Cell>
      <td className="phone:col-span-2">
        <Select<MappedRole>
          value={role}
          options={awake ? ROLE_OPTIONS : chosen(role, roleLabel(role))}
          placeholder="choose a role"
          disabled={disabled}
          aria-label={`Role of ${column.column}`}
          onChange={(next) => onChange(withRole(answer, next))}
          className="w-[220px] phone:w-full"
        />
      </td>
      <td className="phone:col-span-2">
        {named === null || role === null || role === IGNORE_ROLE ? (
          <span className="phone:hidden">{MISSING}</span>
        ) : (
          <span className="flex gap-2">
            {named.quantity === 'status' ? null : (
              <Select
                value={answer.unit}
                options={
                  awake
                    ? unitsFor(role).map((id) => ({ value: id, label: TREND_UNITS[id].label }))
                    : chosen(answer.unit, answer.unit === null ? '' : TREND_UNITS[answer.unit].label)
                }
                placeholder="choose"
                disabled={disabled}
                aria-label={`Unit of ${column.column}`}
                onChange={(unit) => onChange({ ...answer, unit })}
                className="w-[92px]"
              />
            )}
            {named.indexed ? (
              <Select
                value={String(answer.unitIndex ?? 1)}
                options={numbers.map((value) => ({ value, label: `${named.indexed ?? ''} ${value}` }))}
                disabled={disabled}
                aria-label={`Which ${named.indexed} ${column.column} belongs to`}
                onChange={(value) => onChange({ ...answer, unitIndex: Number(value) })}
                className="w-[92px]"
              />
            ) : null}
          </span>
        )}
      </td>
      <td className="max-w-[52ch] text-ink-2 phone:col-span-2">
        {column.reason}
        {clash === null ? null : <b className="ml-1.5 font-semibold text-ink">{clash}</b>}
        {carried === null || role === null || role === IGNORE_ROLE ? null : (
          <Select
            value={answer.further ? 'further' : 'same'}
            options={[
              { value: 'same', label: `goes on with “${carried.join('”, “')}”` },
              { value: 'further', label: furtherWords(role) },
            ]}
            disabled={disabled}
            aria-label={`Whether ${column.column} is another point than ${carried.join(', ')}`}
            onChange={(value) => onChange({ ...answer, further: value === 'further' })}
            className="mt-1 w-full"
          />
        )}
      </td>
      <td className="phone:col-span-2">
        <ConfidenceBar confidence={column.confidence} />
      </td>
    </tr>
  );
});
