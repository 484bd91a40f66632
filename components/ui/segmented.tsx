import { RadioGroup } from 'radix-ui';
import type { ReactNode } from 'react';

export interface SegmentedProps<Value extends string> {
  /** Names the choice; shown before it unless `hideLabel`. */
  label: string;
  hideLabel?: boolean;
  value: Value;
  options: readonly { value: Value; label: ReactNode; disabled?: boolean }[];
  onChange: (value: Value) => void;
  className?: string;
}

/** One of a few, all in view: a radio group drawn as joined segments, the chosen one ink filled. Arrow keys move. */
export function Segmented<Value extends string>(props: SegmentedProps<Value>) {
  const { label, hideLabel = false, value, options, onChange, className = '' } = props;
  const choose = (next: string) => {
    const chosen = options.find((option) => option.value === next);
    if (chosen) onChange(chosen.value);
  };
  return (
    <div className={`flex flex-wrap items-center gap-2.5 ${className}`}>
      {hideLabel ? null : <span aria-hidden="true">{label}</span>}
      <RadioGroup.Root aria-label={label} value={value} onValueChange={choose} className="flex">
        {options.map((option) => (
          <RadioGroup.Item
            key={option.value}
            value={option.value}
            disabled={option.disabled}
            className="-ml-px min-h-(--control-small) border border-rule px-2.5 first:ml-0 first:rounded-l last:rounded-r focus-visible:z-2 data-[state=checked]:z-1 data-[state=checked]:border-ink data-[state=checked]:bg-ink data-[state=checked]:font-semibold data-[state=checked]:text-paper data-[state=unchecked]:hover:bg-tint relative transition-colors duration-90 ease-linear disabled:text-ink-3 phone:px-3"
          >
            {option.label}
          </RadioGroup.Item>
        ))}
      </RadioGroup.Root>
    </div>
  );
}
