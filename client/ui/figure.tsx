import { useEffect, useId } from 'react';
import type { CurrencyCode, Minor } from '#domain/money/index';
import { useMargin, type Why } from './margin.tsx';
import { moneyText } from './money.tsx';

export interface FigureProps {
  readonly amount: Minor | number;
  readonly currency: CurrencyCode | string;
  readonly why: Why;
  /** Stable within the page, so that the address can hold which figure is open. */
  readonly id?: string;
  readonly alone?: boolean;
  readonly className?: string;
}

/** A money figure that answers why: a dotted line under it, the highlighter behind it while it is asked about. */
export function Figure({ amount, currency, why, id, alone = false, className = '' }: FigureProps) {
  const own = useId();
  const figureId = id ?? own;
  const margin = useMargin();
  const register = margin?.register;
  const whyText = JSON.stringify(why);
  // biome-ignore lint/correctness/useExhaustiveDependencies: the reasons are compared by their text
  useEffect(() => register?.(figureId, { why, currency }), [register, figureId, whyText, currency]);
  const text = moneyText(amount, currency, alone);
  if (!margin) return <span className={`tabular whitespace-nowrap ${className}`}>{text}</span>;
  const open = margin.openId === figureId;
  return (
    <button
      type="button"
      aria-expanded={open}
      aria-label={`${text}, why`}
      onClick={() => margin.toggle(figureId)}
      className={`tabular min-h-6 whitespace-nowrap px-1 -mr-1 text-right ${open ? 'bg-fluorescein text-on-fluorescein outline outline-1 outline-ink' : 'border-b border-dotted border-edge'} ${className}`}
    >
      {text}
    </button>
  );
}
