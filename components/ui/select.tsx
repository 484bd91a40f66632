'use client';
import { getNonce } from 'get-nonce';
import { Check, ChevronDown } from 'lucide-react';
import { Select as Radix } from 'radix-ui';
import type { ReactNode } from 'react';

export interface SelectOption<Value extends string> {
  value: Value;
  label: ReactNode;
  /** What typing finds, where the label is not plain text. */
  text?: string;
  disabled?: boolean;
}

export interface SelectProps<Value extends string> {
  /** null: nothing chosen yet, the placeholder shows and the border is heavy. */
  value: Value | null;
  options: readonly SelectOption<Value>[] | readonly { group: string; options: readonly SelectOption<Value>[] }[];
  onChange: (value: Value) => void;
  placeholder?: string;
  disabled?: boolean;
  id?: string;
  /** Where no visible label names it. */
  'aria-label'?: string;
  'aria-describedby'?: string;
  'aria-invalid'?: true;
  className?: string;
}

type Group<Value extends string> = { group: string; options: readonly SelectOption<Value>[] };
const isGroup = <Value extends string>(entry: SelectOption<Value> | Group<Value>): entry is Group<Value> =>
  'group' in entry;

/** One of many: a closed box with a list. Typing finds an entry; arrows, Home and End move. */
export function Select<Value extends string>(props: SelectProps<Value>) {
  const { value, options, onChange, placeholder = 'choose', disabled, className = '', ...named } = props;
  const entries: readonly (SelectOption<Value> | Group<Value>)[] = options;
  const choose = (next: string) => {
    const flat = entries.flatMap((entry) => (isGroup(entry) ? entry.options : [entry]));
    const chosen = flat.find((option) => option.value === next);
    if (chosen) onChange(chosen.value);
  };
  const open = value === null;
  return (
    <Radix.Root value={value ?? ''} onValueChange={choose} disabled={disabled}>
      <Radix.Trigger
        className={`inline-flex min-h-(--control) w-full items-center justify-between gap-2 rounded border bg-sheet px-2.5 text-start disabled:text-ink-3 ${open ? 'border-ink font-semibold' : 'border-rule hover:border-ink-2'} ${className}`}
        {...named}
      >
        <span className="truncate">
          <Radix.Value placeholder={placeholder} />
        </span>
        <Radix.Icon>
          <ChevronDown size={16} strokeWidth={1.5} aria-hidden="true" />
        </Radix.Icon>
      </Radix.Trigger>
      <Radix.Portal>
        <Radix.Content
          position="popper"
          sideOffset={2}
          className="z-50 max-h-(--radix-select-content-available-height) min-w-(--radix-select-trigger-width) overflow-hidden rounded border border-ink bg-paper text-ink"
        >
          <Radix.Viewport nonce={getNonce()}>
            {entries.map((entry) =>
              isGroup(entry) ? (
                <Radix.Group key={entry.group} className="border-t border-rule first:border-t-0">
                  <Radix.Label className="px-2.5 pt-1.5 text-micro text-ink-3">{entry.group}</Radix.Label>
                  {entry.options.map((option) => (
                    <Option key={option.value} {...option} />
                  ))}
                </Radix.Group>
              ) : (
                <Option key={entry.value} {...entry} />
              ),
            )}
          </Radix.Viewport>
        </Radix.Content>
      </Radix.Portal>
    </Radix.Root>
  );
}

function Option({ value, label, text, disabled }: SelectOption<string>) {
  return (
    <Radix.Item
      value={value}
      textValue={text}
      disabled={disabled}
      className="flex min-h-(--control-small) items-center justify-between gap-4 px-2.5 outline-none data-[disabled]:text-ink-3 data-[highlighted]:bg-tint data-[state=checked]:font-semibold"
    >
      <Radix.ItemText>{label}</Radix.ItemText>
      <Radix.ItemIndicator>
        <Check size={16} strokeWidth={1.5} aria-hidden="true" />
      </Radix.ItemIndicator>
    </Radix.Item>
  );
}
