'use client';
import { useId, useState } from 'react';
import { Button, TextButton } from '@/components/ui/button';
import { Field, Input } from '@/components/ui/field';
import { Select } from '@/components/ui/select';
import { Notice } from '@/components/ui/states';
import { MINUS } from '@/lib/client/format';
import { FORM_WORDS, filesWords } from '@/lib/client/table-words';
import type { Preview } from '@/lib/schemas/upload';
import type { TimestampForm } from '@/lib/trends/types';
import {
  dayOrMonth,
  doubtsOf,
  needsYear,
  possibleForms,
  proposedShift,
  timeExample,
  timeTexts,
  type TimeAnswer,
  type TimeExample,
  type TimeGroup,
} from './mapping-times';

export interface TimesRowProps {
  preview: Preview;
  group: TimeGroup;
  /** Says of which files this is. */
  named: boolean;
  timeZone: string;
  disabled: boolean;
  onChange: (part: Partial<TimeAnswer>, field: string) => void;
}

/** The times of tables written alike: the example, the questions that are open, and all that can be changed. */
export function TimesRow({ preview, group, named, timeZone, disabled, onChange }: TimesRowProps) {
  const { answer } = group;
  const index = group.tables[0] ?? 0;
  const table = preview.tables[index];
  const [changing, setChanging] = useState(false);
  const controls = useId();
  if (table === undefined) return null;
  const files = group.tables.flatMap((each) => preview.tables[each]?.files ?? []);
  const doubts = group.tables.flatMap((each) => doubtsOf(preview, each));
  const clocks = doubts.filter(({ code }) => code === 'clock-offset');
  const orders = group.tables.flatMap((each) => dayOrMonth(preview, each, answer) ?? []).slice(0, 2);
  const endStamps = doubts.find(({ code }) => code === 'end-stamps');
  const noYear = doubts.find(({ code }) => code === 'no-year');
  const show = (what: 'year' | 'stamps' | 'all') =>
    changing ||
    (what === 'year' && (noYear !== undefined || needsYear(answer.form))) ||
    (what === 'stamps' && endStamps);
  return (
    <div className="border-b border-grid pb-3 not-first:pt-3 last:border-b-0 last:pb-0">
      {named ? <p className="mb-0.5 font-semibold break-words">{filesWords(files)}</p> : null}
      <p>
        <ExampleWords example={timeExample(table, answer, timeZone)} timeZone={timeZone} answer={answer} />{' '}
        {disabled ? null : (
          <TextButton aria-expanded={changing} aria-controls={controls} onClick={() => setChanging(!changing)}>
            {changing ? 'done' : 'change'}
          </TextButton>
        )}
      </p>
      {orders.length === 2 ? (
        <OrderQuestion {...{ preview, index, answer, timeZone, disabled, orders, onChange }} />
      ) : null}
      {clocks.map((doubt) => (
        <ClockQuestion
          key={doubt.message}
          message={doubt.message}
          shift={proposedShift(doubt)}
          answer={answer}
          disabled={disabled}
          onChange={onChange}
        />
      ))}
      <div id={controls} className="flex flex-wrap gap-x-6 gap-y-3">
        {show('all') ? (
          <Field label="written as" className="mt-3 w-[220px] phone:w-full">
            {(ids) => (
              <Select<TimestampForm>
                {...ids}
                value={answer.form}
                disabled={disabled}
                options={possibleForms(table, answer).map((form) => ({ value: form, label: FORM_WORDS[form] }))}
                onChange={(form) => onChange({ form, year: needsYear(form) ? answer.year : null }, 'form')}
              />
            )}
          </Field>
        ) : null}
        {show('year') && needsYear(answer.form) ? (
          <Field
            label="year of the first row"
            className="mt-3 w-[220px] phone:w-full"
            hint={noYear === undefined ? undefined : 'the times have none: this is the latest that lies in the past'}
          >
            {(ids) => (
              <Input
                {...ids}
                type="number"
                min={1970}
                max={2199}
                step={1}
                disabled={disabled}
                value={answer.year ?? ''}
                onChange={(event) => onChange({ year: numberIn(event.target.value) }, 'year')}
              />
            )}
          </Field>
        ) : null}
        {show('stamps') ? (
          <Field
            label="each time is"
            className="mt-3 w-[300px] phone:w-full"
            hint={endStamps === undefined ? undefined : endStamps.message}
          >
            {(ids) => (
              <Select
                {...ids}
                value={answer.stamps}
                disabled={disabled}
                options={[
                  { value: 'start', label: 'the reading’s, or its interval’s start' },
                  { value: 'end', label: 'the end of its interval' },
                ]}
                onChange={(stamps) => onChange({ stamps }, 'stamps')}
              />
            )}
          </Field>
        ) : null}
        {show('all') || (answer.shiftMinutes !== 0 && clocks.length === 0) ? (
          <Field
            label="clock shift"
            unit="min"
            className="mt-3 w-[220px] phone:w-full"
            hint="added to every time, for a clock that is off"
          >
            {(ids) => (
              <Input
                {...ids}
                type="number"
                min={-2880}
                max={2880}
                step={1}
                disabled={disabled}
                value={answer.shiftMinutes}
                onChange={(event) => onChange({ shiftMinutes: numberIn(event.target.value) ?? 0 }, 'shift')}
              />
            )}
          </Field>
        ) : null}
      </div>
    </div>
  );
}

const numberIn = (text: string): number | null => {
  const value = Number(text);
  return text.trim() === '' || !Number.isFinite(value) ? null : Math.round(value);
};

function ExampleWords({
  example,
  timeZone,
  answer,
}: {
  example: TimeExample | null;
  timeZone: string;
  answer: TimeAnswer;
}) {
  if (example === null)
    return (
      <>
        Read as {FORM_WORDS[answer.form]}, {timeZone}.
      </>
    );
  const { text, read, counted, hasOffset } = example;
  if (read === null)
    return (
      <>
        “<i>{text}</i>” cannot be read so yet.
      </>
    );
  return (
    <>
      “<i>{text}</i>” is read as <b>{read}</b>, {timeZone}
      {hasOffset ? ', by its own offset' : ''}
      {answer.shiftMinutes === 0 ? '' : `, shifted by ${signed(answer.shiftMinutes)}`}
      {counted === null ? '' : `; its interval began ${counted}`}.
    </>
  );
}

const signed = (minutes: number): string => `${minutes < 0 ? MINUS : '+'}${Math.abs(minutes)}\u00a0min`;

interface OrderQuestionProps extends Omit<TimesRowProps, 'group' | 'named'> {
  index: number;
  answer: TimeAnswer;
  orders: readonly TimestampForm[];
}

/** The file leaves open which number is the day: both readings, of the first row and of the last one shown. */
function OrderQuestion({ preview, index, answer, timeZone, disabled, orders, onChange }: OrderQuestionProps) {
  const name = useId();
  const table = preview.tables[index];
  if (table === undefined) return null;
  const texts = timeTexts(table);
  const readAs = (form: TimestampForm, row: number) => timeExample(table, { ...answer, form }, timeZone, row)?.read;
  return (
    <fieldset disabled={disabled} className="mt-2.5 border-l-[3px] border-ink pl-2.5">
      <legend className="float-left mb-1 w-full font-semibold">
        Day or month first? The file itself does not say: no number in it is over 12.
      </legend>
      {orders.map((form) => (
        <label key={form} className="clear-both flex min-h-(--control) items-center gap-2.5">
          <input
            type="radio"
            name={name}
            className="size-4 shrink-0 accent-(--ink)"
            checked={answer.form === form}
            onChange={() => onChange({ form }, 'form')}
          />
          <span>
            <b>{form.startsWith('day') ? 'Day first' : 'Month first'}</b>: “<i>{texts[0]}</i>” is{' '}
            {readAs(form, 0) ?? 'not a time'}
            {timeExample(table, { ...answer, form }, timeZone)?.ahead === true ? ', which lies ahead' : ''}
            {texts.length > 1 ? (
              <span className="text-ink-2">
                ; row {table.dialect.firstDataRow + texts.length - 1} is {readAs(form, -1) ?? 'not a time'}
              </span>
            ) : null}
          </span>
        </label>
      ))}
    </fieldset>
  );
}

interface ClockQuestionProps {
  message: string;
  shift: number | null;
  answer: TimeAnswer;
  disabled: boolean;
  onChange: TimesRowProps['onChange'];
}

/** Two sources whose clocks do not agree: what was found, and the shift that would put it right. */
function ClockQuestion({ message, shift, answer, disabled, onChange }: ClockQuestionProps) {
  return (
    <div className="mt-2.5">
      <Notice>
        {message}
        {shift === null ? null : (
          <span className="mt-1.5 flex flex-wrap items-center gap-2.5">
            {answer.shiftMinutes === shift ? (
              <>
                <span>Shifted by {signed(shift)}.</span>
                <Button disabled={disabled} onClick={() => onChange({ shiftMinutes: 0 }, 'shift')}>
                  Leave as it is
                </Button>
              </>
            ) : (
              <Button disabled={disabled} onClick={() => onChange({ shiftMinutes: shift }, 'shift')}>
                Shift by {signed(shift)}
              </Button>
            )}
          </span>
        )}
      </Notice>
    </div>
  );
}
