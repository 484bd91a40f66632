'use client';
import { useState } from 'react';
import { TextButton } from '@/components/ui/button';
import { Field, Input } from '@/components/ui/field';
import { Section } from '@/components/ui/section';
import { TimeZone } from '@/lib/schemas/common';
import type { Preview } from '@/lib/schemas/upload';
import { timeGroups, type TimeAnswer } from './mapping-times';
import { TimesRow } from './times-row';

export interface TimesSectionProps {
  preview: Preview;
  times: readonly TimeAnswer[];
  timeZone: string;
  disabled: boolean;
  /** `field` names what is being typed in, so that one undo takes back all of it. */
  onTimes: (times: readonly TimeAnswer[], field: string) => void;
  onZone: (timeZone: string) => void;
}

/** How the times are read, each shown on the first row; what is in doubt is asked here, the rest can be changed. */
export function TimesSection({ preview, times, timeZone, disabled, onTimes, onZone }: TimesSectionProps) {
  const [apart, setApart] = useState(false);
  const groups = timeGroups(preview, times, apart);
  const mayPart = preview.tables.length > 1 && (apart || groups.length < preview.tables.length);
  const zoneError = TimeZone.safeParse(timeZone).success ? undefined : 'Choose a zone from the list.';
  return (
    <Section
      title="Times"
      sub="how they are read, shown on the first row"
      className="mb-7.5"
      aside={
        mayPart ? (
          <TextButton onClick={() => setApart(!apart)}>{apart ? 'those alike together' : 'table by table'}</TextButton>
        ) : undefined
      }
    >
      <div className="grid grid-cols-[minmax(0,1fr)_220px] gap-x-12 gap-y-4 phone:block">
        <div className="phone:mb-4">
          {groups.map((group) => (
            <TimesRow
              key={group.tables.join(' ')}
              preview={preview}
              group={group}
              named={groups.length > 1}
              timeZone={timeZone}
              disabled={disabled}
              onChange={(part, field) =>
                onTimes(
                  times.map((time, index) => (group.tables.includes(index) ? { ...time, ...part } : time)),
                  `${field} ${group.tables.join(' ')}`,
                )
              }
            />
          ))}
        </div>
        <Field label="time zone of the times" hint="times that carry their own offset do not need it" error={zoneError}>
          {(ids) => (
            <>
              <Input
                {...ids}
                value={timeZone}
                disabled={disabled}
                list="mapping-zones"
                autoComplete="off"
                onChange={(event) => onZone(event.target.value)}
              />
              <datalist id="mapping-zones">
                {ZONES.map((zone) => (
                  <option key={zone} value={zone} />
                ))}
              </datalist>
            </>
          )}
        </Field>
      </div>
    </Section>
  );
}

const ZONES = Intl.supportedValuesOf('timeZone');
