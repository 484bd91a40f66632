import { Checkbox as RadixCheckbox } from 'radix-ui';
import { Check } from 'lucide-react';
import { useId, type ComponentProps, type ReactNode } from 'react';

export interface FieldIds {
  id: string;
  'aria-describedby': string | undefined;
  'aria-invalid': true | undefined;
}

export interface FieldProps {
  label: ReactNode;
  /** What is wrong with what was typed, and what to do. */
  error?: string;
  hint?: ReactNode;
  /** After the label, in third ink: the unit, "assumed". */
  unit?: ReactNode;
  className?: string;
  /** The control; spread the ids onto it. */
  children: (ids: FieldIds) => ReactNode;
}

/** A labelled control: label above, hint and error below and announced with it. */
export function Field({ label, error, hint, unit, className = '', children }: FieldProps) {
  const id = useId();
  const hintId = hint === undefined ? undefined : `${id}-hint`;
  const errorId = error === undefined ? undefined : `${id}-error`;
  const describedBy = [errorId, hintId].filter((part) => part !== undefined).join(' ');
  return (
    <div className={className}>
      <label htmlFor={id} className="mb-1 block text-ink-2">
        {label}
        {unit === undefined ? null : <span className="ml-1.5 text-micro text-ink-3">{unit}</span>}
      </label>
      {children({
        id,
        'aria-describedby': describedBy === '' ? undefined : describedBy,
        'aria-invalid': error === undefined ? undefined : true,
      })}
      {error === undefined ? null : (
        <p id={errorId} className="mt-1 border-l-[3px] border-ink pl-2 text-small">
          {error}
        </p>
      )}
      {hint === undefined ? null : (
        <p id={hintId} className="mt-1 text-small text-ink-2">
          {hint}
        </p>
      )}
    </div>
  );
}

const BOX =
  'w-full rounded border border-ink-2 bg-sheet px-2.5 text-ink placeholder:text-ink-3 aria-invalid:border-2 aria-invalid:border-ink disabled:border-rule disabled:text-ink-3';

/** A line of text. 36 px high; 44 px on a phone, at 16 px type so that no browser zooms in. */
export function Input({ className = '', ...rest }: ComponentProps<'input'>) {
  return <input className={`min-h-9 phone:min-h-11 phone:text-[1rem] ${BOX} ${className}`} {...rest} />;
}

export function TextArea({ className = '', ...rest }: ComponentProps<'textarea'>) {
  return <textarea rows={3} className={`py-1.5 phone:text-[1rem] ${BOX} ${className}`} {...rest} />;
}

export interface CheckboxProps {
  checked: boolean;
  onChange: (checked: boolean) => void;
  disabled?: boolean;
  children: ReactNode;
}

/** A tick box with its words; the whole line answers. */
export function Checkbox({ checked, onChange, disabled, children }: CheckboxProps) {
  const id = useId();
  return (
    <div className="flex min-h-(--control) items-center gap-2.5">
      <RadixCheckbox.Root
        id={id}
        checked={checked}
        disabled={disabled}
        onCheckedChange={(next) => onChange(next === true)}
        className="relative flex size-4.5 shrink-0 items-center justify-center rounded border border-ink-2 bg-sheet phone:after:absolute phone:after:-inset-3.5 phone:after:content-['']"
      >
        <RadixCheckbox.Indicator>
          <Check size={16} strokeWidth={1.5} aria-hidden="true" />
        </RadixCheckbox.Indicator>
      </RadixCheckbox.Root>
      <label htmlFor={id}>{children}</label>
    </div>
  );
}
