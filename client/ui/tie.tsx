import type { CurrencyCode, Minor } from '#domain/money/index';
import { moneyText } from './money.tsx';

/** The difference between two figures that must agree: a quiet word when there is none, rose bengal otherwise. */
export function Tie({
  difference,
  currency,
  awaited = false,
}: {
  readonly difference: Minor | number | null;
  readonly currency: CurrencyCode | string;
  readonly awaited?: boolean;
}) {
  if (difference === null) return <span className="text-small text-soft">{awaited ? 'awaited' : '–'}</span>;
  if (difference === 0) return <span className="text-small font-semibold text-lissamine">ties</span>;
  return (
    <span className="tabular whitespace-nowrap font-extrabold text-bengal">
      {difference > 0 ? '+' : ''}
      {moneyText(difference, currency)}
    </span>
  );
}
