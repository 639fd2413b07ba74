import { Money } from '#client/ui/money.tsx';
import { Section } from '#client/ui/page.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import type { PriceBookView } from '#contract/catalogue';
import { currencySign } from '#domain/money/index';
import type { PriceBook } from '#domain/pricing/index';
import {
  chargeWords,
  edgeWords,
  measureWords,
  namesOf,
  PER,
  procedureWords,
  secondEyeWords,
} from './words.ts';

type BookProps = { readonly book: PriceBook };
type CostProps = BookProps & { readonly costs: PriceBookView['costs'] };

/** What surgery of one eye costs. */
export function Procedures({ book, costs }: CostProps) {
  const sign = currencySign(book.currency);
  return (
    <Section title="Procedures">
      <SheetTable
        caption="Procedures, per eye"
        rows={book.procedures}
        rowKey={(row) => row.id}
        columns={[
          { id: 'name', head: 'Per eye', cell: (row) => row.label },
          {
            id: 'aftercare',
            head: 'Aftercare',
            wide: true,
            cell: (row) => (row.followUpId ? namesOf(book.followUps, [row.followUpId]) : 'none'),
          },
          {
            id: 'alone',
            head: `Stand-alone, ${sign}`,
            align: 'right',
            wide: true,
            cell: (row) => <Money amount={row.standAloneMinor} currency={book.currency} />,
          },
          ...(costs
            ? [
                {
                  id: 'cost',
                  head: `Costs us, ${sign}`,
                  align: 'right' as const,
                  wide: true,
                  cell: (row: PriceBook['procedures'][number]) => (
                    <Money amount={costs.perEyeMinor[row.id] ?? 0} currency={book.currency} />
                  ),
                },
              ]
            : []),
          {
            id: 'price',
            head: `Price, ${sign}`,
            align: 'right',
            cell: (row) => <Money amount={row.priceMinor} currency={book.currency} />,
          },
        ]}
      />
    </Section>
  );
}

/** What a strong prescription adds, per eye. */
export function Bands({ book }: BookProps) {
  if (book.bands.length === 0) return null;
  return (
    <Section title="Surcharges by prescription">
      <p className="mb-2 text-soft">
        By the minus-cylinder form, in dioptres. The other notation gives the same band.
      </p>
      <SheetTable
        caption="Surcharges per eye"
        rows={book.bands}
        rowKey={(row) => row.id}
        columns={[
          {
            id: 'band',
            head: 'Per eye',
            cell: (row) => (
              <>
                {measureWords(row.measure)} <span className="tabular">{edgeWords(row)}</span>
              </>
            ),
          },
          { id: 'for', head: 'For', wide: true, cell: (row) => procedureWords(book, row.procedureIds) },
          {
            id: 'needs',
            head: 'Needs',
            wide: true,
            cell: (row) =>
              row.requiresAddOnIds.length === 0 ? '' : namesOf(book.addOns, row.requiresAddOnIds),
          },
          {
            id: 'charge',
            head: `Surcharge, ${currencySign(book.currency)}`,
            align: 'right',
            cell: (row) => chargeWords(row.charge, book.currency),
          },
        ]}
      />
    </Section>
  );
}

/** What comes off the second eye of a pair, and what happens when it never comes. */
export function SecondEye({ book }: BookProps) {
  if (book.secondEye.length === 0) return null;
  return (
    <Section title="Off the second eye">
      <SheetTable
        caption="Off the second eye"
        rows={book.secondEye}
        rowKey={(row) => row.id}
        columns={[
          { id: 'pair', head: 'Pair', cell: (row) => row.label },
          {
            id: 'never',
            head: 'If it never happens',
            wide: true,
            cell: (row) =>
              row.ifNever?.kind === 'supplement'
                ? `${secondEyeWords(row)}: ${chargeWords({ kind: 'amount', amountMinor: row.ifNever.amountMinor }, book.currency)}`
                : secondEyeWords(row),
          },
          {
            id: 'same',
            head: 'Same day',
            align: 'right',
            cell: (row) => (row.sameSession ? chargeWords(row.sameSession, book.currency) : 'none'),
          },
          {
            id: 'staged',
            head: 'Staged',
            align: 'right',
            cell: (row) =>
              row.staged ? (
                <>
                  {chargeWords(row.staged.off, book.currency)}
                  <span className="block text-small text-soft">within {row.staged.withinDays} days</span>
                </>
              ) : (
                'none'
              ),
          },
        ]}
      />
    </Section>
  );
}

/** What can be added. */
export function AddOns({ book, costs }: CostProps) {
  if (book.addOns.length === 0) return null;
  const sign = currencySign(book.currency);
  return (
    <Section title="Add-ons">
      <SheetTable
        caption="Add-ons"
        rows={book.addOns}
        rowKey={(row) => row.id}
        columns={[
          {
            id: 'name',
            head: 'Add-on',
            cell: (row) => (
              <>
                {row.label} <span className="text-small text-soft">{PER[row.per]}</span>
              </>
            ),
          },
          { id: 'tax', head: 'Tax', wide: true, cell: (row) => namesOf(book.taxClasses, [row.taxClassId]) },
          ...(costs
            ? [
                {
                  id: 'cost',
                  head: `Costs us, ${sign}`,
                  align: 'right' as const,
                  wide: true,
                  cell: (row: PriceBook['addOns'][number]) => (
                    <Money amount={costs.addOnMinor[row.id] ?? 0} currency={book.currency} />
                  ),
                },
              ]
            : []),
          {
            id: 'price',
            head: `Price, ${sign}`,
            align: 'right',
            cell: (row) => <Money amount={row.priceMinor} currency={book.currency} />,
          },
        ]}
      />
    </Section>
  );
}
