import { type CurrencyCode, formatAmount, formatMoney, type Minor } from '#domain/money/index';

export interface MoneyProps {
  readonly amount: Minor | number;
  readonly currency: CurrencyCode | string;
  /** With the currency's sign, where the amount stands in a sentence or alone; columns carry it in their head. */
  readonly alone?: boolean;
}

/** An amount: tabular, the minor unit always shown, the true minus sign. */
export function Money({ amount, currency, alone = false }: MoneyProps) {
  return <span className="tabular whitespace-nowrap">{moneyText(amount, currency, alone)}</span>;
}

/** The text of an amount, for names and messages. */
export function moneyText(amount: Minor | number, currency: CurrencyCode | string, alone = false): string {
  return alone
    ? formatMoney(amount as Minor, currency as CurrencyCode)
    : formatAmount(amount as Minor, currency as CurrencyCode);
}
