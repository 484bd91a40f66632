import { Slot } from 'radix-ui';
import type { ComponentProps } from 'react';

export interface ButtonProps extends ComponentProps<'button'> {
  /** One primary a page. */
  variant?: 'primary' | 'normal' | 'quiet';
  /** Takes the look over to the one child, a link for instance. */
  asChild?: boolean;
}

const LOOK = {
  primary: 'border-ink bg-ink text-paper font-semibold hover:bg-ink-2 hover:border-ink-2',
  normal: 'border-ink-2 bg-paper text-ink hover:bg-tint',
  quiet: 'border-rule bg-paper text-ink hover:border-ink-2',
} as const;

/** A push button: 30 px, 44 px on a phone. */
export function Button({ variant = 'normal', asChild = false, className = '', type, ...rest }: ButtonProps) {
  const Element = asChild ? Slot.Root : 'button';
  return (
    <Element
      type={asChild ? type : (type ?? 'button')}
      className={`inline-flex min-h-(--control) items-center justify-center gap-2 rounded border px-3 font-medium transition-colors duration-90 ease-linear disabled:border-rule disabled:bg-paper disabled:text-ink-3 phone:px-4 ${LOOK[variant]} ${className}`}
      {...rest}
    />
  );
}

/** A button that reads as a link within a line of text or a table; its touch area is 44 px high on a phone. */
export function TextButton({ className = '', type = 'button', ...rest }: ComponentProps<'button'>) {
  return (
    <button
      type={type}
      className={`link relative disabled:border-transparent disabled:text-ink-3 phone:after:absolute phone:after:inset-x-0 phone:after:-inset-y-3 phone:after:content-[''] ${className}`}
      {...rest}
    />
  );
}
