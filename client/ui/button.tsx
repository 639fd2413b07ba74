import type { ReactNode } from 'react';
import { Button as AriaButton, type ButtonProps as AriaButtonProps } from 'react-aria-components';
import { Link, type LinkProps } from 'react-router-dom';

export type ButtonKind = 'primary' | 'secondary' | 'quiet' | 'destructive';

const SHAPE =
  'inline-flex min-h-10 items-center justify-center gap-2 rounded-sm px-4 text-body font-semibold no-underline';
const LOOK: Readonly<Record<ButtonKind, string>> = {
  primary: 'bg-trypan text-on-trypan border border-trypan disabled:opacity-50',
  secondary: 'border border-trypan text-trypan bg-sheet disabled:opacity-50',
  quiet: 'text-trypan underline underline-offset-3 px-1 min-h-8 disabled:opacity-50',
  destructive: 'border border-bengal text-bengal bg-sheet disabled:opacity-50',
};

export interface ButtonProps
  extends Omit<AriaButtonProps, 'children' | 'className' | 'isDisabled' | 'isPending'> {
  readonly kind?: ButtonKind;
  /** True while what it started is under way: it cannot be pressed again, and says so. */
  readonly sending?: boolean;
  readonly disabled?: boolean;
  readonly children: ReactNode;
  readonly className?: string;
}

/** A button. Primary once per screen; quiet inside text and tables. */
export function Button({
  kind = 'secondary',
  sending = false,
  disabled = false,
  children,
  className = '',
  ...rest
}: ButtonProps) {
  return (
    <AriaButton {...rest} isDisabled={disabled || sending} className={`${SHAPE} ${LOOK[kind]} ${className}`}>
      {sending ? <span aria-live="polite">Sending…</span> : children}
    </AriaButton>
  );
}

/** A link that looks like a button: it goes somewhere and changes nothing. */
export function LinkButton({
  kind = 'secondary',
  className = '',
  ...rest
}: LinkProps & { readonly kind?: ButtonKind }) {
  return <Link {...rest} className={`${SHAPE} ${LOOK[kind]} ${className}`} />;
}
