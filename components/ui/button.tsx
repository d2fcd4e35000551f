import Link from 'next/link';
import type { ButtonHTMLAttributes, ComponentProps, ReactNode } from 'react';

/** `main`: the one thing to do on a view; `outlined`: the rest; `bare`: to leave things as they are. */
export type ButtonKind = 'main' | 'outlined' | 'bare';

const SHARED =
  'inline-flex h-10 items-center justify-center gap-[7px] rounded-button border px-3 text-note font-title whitespace-nowrap no-underline transition-colors duration-quick hand:h-control pointer-coarse:h-control-touch print:hidden ' +
  'disabled:cursor-not-allowed disabled:border-dashed disabled:border-line-strong disabled:bg-transparent disabled:text-ink-3';
const KINDS: Record<ButtonKind, string> = {
  main: 'border-ink bg-ink font-strong text-paper hover:border-ink-2 hover:bg-ink-2 hover:text-paper',
  outlined:
    'border-line-strong bg-transparent text-ink hover:border-ink hover:bg-leaf hover:text-ink active:bg-sunk',
  bare: 'border-transparent bg-transparent px-2 text-ink hover:bg-leaf hover:text-ink active:bg-sunk',
};

export const buttonClasses = (kind: ButtonKind = 'outlined', className = '') =>
  `${SHARED} ${KINDS[kind]} ${className}`;

/** A key as its cap, inside a button or a sentence. */
export function KeyCap({ children }: { children: ReactNode }) {
  return (
    <kbd className="inline-block min-w-[17px] rounded-field border border-current px-1 text-center font-sans text-tick opacity-75">
      {children}
    </kbd>
  );
}

interface ButtonProps extends ButtonHTMLAttributes<HTMLButtonElement> {
  kind?: ButtonKind;
  /** While true the button can't be pressed again and screen readers hear that it is busy. */
  busy?: boolean;
  /** Why the button is disabled; stands beside it as text. Giving a reason disables it. */
  reason?: string | null;
  keyCap?: string;
}

/** A button; `type="button"` unless told otherwise. */
export function Button({
  kind = 'outlined',
  busy = false,
  reason = null,
  keyCap,
  className,
  children,
  disabled,
  type = 'button',
  ...rest
}: ButtonProps) {
  const button = (
    <button
      type={type}
      className={buttonClasses(kind, className)}
      disabled={disabled || busy || reason !== null}
      aria-busy={busy || undefined}
      {...rest}
    >
      {children}
      {keyCap ? <KeyCap>{keyCap}</KeyCap> : null}
    </button>
  );
  if (reason === null) return button;
  return (
    <span className="inline-flex flex-wrap items-center gap-x-3 gap-y-1">
      {button}
      <span className="text-small text-ink-3">{reason}</span>
    </span>
  );
}

/** A link that looks like a button: for actions that only lead somewhere. */
export function ButtonLink({
  kind = 'outlined',
  className,
  ...rest
}: ComponentProps<typeof Link> & { kind?: ButtonKind }) {
  return <Link className={buttonClasses(kind, className)} {...rest} />;
}
