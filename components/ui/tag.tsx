import type { ComponentProps } from 'react';

export interface TagProps extends ComponentProps<'span'> {
  /** `reversed` (paper on ink): a warning, a broken limit, an error, something to do. `outlined`: none of these. */
  variant?: 'reversed' | 'outlined';
}

/** A short word of state. The word carries the meaning; there is no colour of alarm. */
export function Tag({ variant = 'outlined', className = '', ...rest }: TagProps) {
  const look = variant === 'reversed' ? 'bg-ink text-paper' : 'bg-paper text-ink';
  return (
    <span
      className={`inline-block border border-ink px-1.5 text-micro font-semibold whitespace-nowrap ${look} ${className}`}
      {...rest}
    />
  );
}
