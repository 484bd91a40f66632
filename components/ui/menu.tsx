'use client';
import { Check, ChevronDown } from 'lucide-react';
import { DropdownMenu as Radix } from 'radix-ui';
import type { ReactNode } from 'react';

export interface MenuProps {
  /** What stands on the trigger. */
  trigger: ReactNode;
  /** Names the trigger where its words do not. */
  label?: string;
  strong?: boolean;
  align?: 'start' | 'end';
  open?: boolean;
  onOpenChange?: (open: boolean) => void;
  className?: string;
  children: ReactNode;
}

/** A list of actions or choices behind a word with a chevron. */
export function Menu({
  trigger,
  label,
  strong,
  align = 'end',
  open,
  onOpenChange,
  className = '',
  children,
}: MenuProps) {
  return (
    <Radix.Root open={open} onOpenChange={onOpenChange}>
      <Radix.Trigger
        aria-label={label}
        className={`inline-flex min-h-(--control) min-w-0 items-center gap-2 rounded ${strong ? 'font-semibold text-ink' : 'text-ink-2 hover:text-ink'} ${className}`}
      >
        <span className="truncate">{trigger}</span>
        <ChevronDown size={16} strokeWidth={1.5} aria-hidden="true" className="shrink-0" />
      </Radix.Trigger>
      <Radix.Portal>
        <Radix.Content
          align={align}
          sideOffset={4}
          collisionPadding={8}
          className="z-50 max-h-(--radix-dropdown-menu-content-available-height) min-w-50 overflow-y-auto rounded border border-ink bg-paper py-1 text-ink"
        >
          {children}
        </Radix.Content>
      </Radix.Portal>
    </Radix.Root>
  );
}

const ITEM =
  'flex min-h-(--control-small) w-full items-center justify-between gap-4 px-3 text-start outline-none data-[disabled]:text-ink-3 data-[highlighted]:bg-tint';

export interface MenuItemProps {
  onSelect?: () => void;
  /** The child is a link. */
  asChild?: boolean;
  disabled?: boolean;
  children: ReactNode;
}

export function MenuItem({ children, ...rest }: MenuItemProps) {
  return (
    <Radix.Item className={ITEM} {...rest}>
      {children}
    </Radix.Item>
  );
}

export interface MenuChoiceProps<Value extends string> {
  label: string;
  value: Value;
  options: readonly { value: Value; label: ReactNode }[];
  onChange: (value: Value) => void;
}

/** A choice of one within a menu, with its name above it. */
export function MenuChoice<Value extends string>({ label, value, options, onChange }: MenuChoiceProps<Value>) {
  const choose = (next: string) => {
    const chosen = options.find((option) => option.value === next);
    if (chosen) onChange(chosen.value);
  };
  return (
    <Radix.Group>
      <Radix.Label className="px-3 pt-1 text-micro text-ink-3">{label}</Radix.Label>
      <Radix.RadioGroup value={value} onValueChange={choose} aria-label={label}>
        {options.map((option) => (
          <Radix.RadioItem key={option.value} value={option.value} className={ITEM}>
            {option.label}
            <Radix.ItemIndicator>
              <Check size={16} strokeWidth={1.5} aria-hidden="true" />
            </Radix.ItemIndicator>
          </Radix.RadioItem>
        ))}
      </Radix.RadioGroup>
    </Radix.Group>
  );
}

export function MenuLabel({ children }: { children: ReactNode }) {
  return <Radix.Label className="px-3 pt-1 text-micro text-ink-3">{children}</Radix.Label>;
}

export const MenuRule = () => <Radix.Separator className="my-1 h-px bg-rule" />;
