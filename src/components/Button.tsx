import type { ButtonHTMLAttributes, ReactNode } from 'react';
import { Link } from 'react-router-dom';
import { classNames } from '../lib/class-names.ts';

type Look = 'main' | 'second' | 'quiet';

const looks: Record<Look, string> = {
  main: 'bg-act text-act-ink font-extrabold px-5 min-h-11 rounded-button hover:bg-act-strong',
  second: 'text-act font-extrabold px-5 min-h-11 rounded-button border-2 border-act hover:bg-act-soft',
  quiet: 'text-ink font-bold underline decoration-edge underline-offset-4 hover:decoration-2 min-h-6',
};
const base =
  'inline-flex items-center justify-center gap-2 text-body leading-tight cursor-pointer disabled:cursor-not-allowed disabled:opacity-55 print:hidden';

export interface ButtonProps extends ButtonHTMLAttributes<HTMLButtonElement> {
  look?: Look;
  /** Work is under way: the button says so and does not fire twice. */
  busy?: boolean;
  busyText?: string;
}

/** A press that does something here. */
export function Button({ look = 'main', busy = false, busyText, className, children, ...rest }: ButtonProps) {
  return (
    <button
      type="button"
      {...rest}
      // Not `disabled` while busy: the focus would be lost to the page's start.
      aria-disabled={busy || undefined}
      onClick={busy ? (event) => event.preventDefault() : rest.onClick}
      className={classNames(base, looks[look], busy && 'opacity-70', className)}
    >
      {busy ? (busyText ?? children) : children}
    </button>
  );
}

/** A press that goes somewhere within the product. */
export function ButtonLink({
  to,
  look = 'main',
  className,
  children,
}: {
  to: string;
  look?: Look;
  className?: string;
  children: ReactNode;
}) {
  return (
    <Link to={to} className={classNames(base, looks[look], className)}>
      {children}
    </Link>
  );
}
