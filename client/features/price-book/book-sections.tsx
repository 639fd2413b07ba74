import { Money } from '#client/ui/money.tsx';
import { DefinitionRows, Section } from '#client/ui/page.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import type { PriceBookView } from '#contract/catalogue';
import { currencySign } from '#domain/money/index';
import { daysBeforeWords, type PriceBook } from '#domain/pricing/index';
import {
  chargeWords,
  coverWords,
  edgeWords,
  limitWords,
  measureWords,
  namesOf,
  planWords,
  procedureWords,
  rungWords,
  scopeWords,
  secondEyeWords,
  taxWords,
} from './words.ts';

/** A version to be read from top to bottom: every rule, with what it costs the clinic for those who may see it. */
export function BookSections({ view }: { readonly view: PriceBookView }) {
  const { book, costs } = view;
  return (
    <>
      <Procedures book={book} costs={costs} />
      <Bands book={book} />
      <SecondEye book={book} />
      <AddOns book={book} costs={costs} />
      <Aftercare book={book} />
      <Packages book={book} />
      <Reductions book={book} />
      <Paying book={book} />
      <Ladder book={book} />
      <TaxAndTerms book={book} />
    </>
  );
}

type BookProps = { readonly book: PriceBook };
type CostProps = BookProps & { readonly costs: PriceBookView['costs'] };

function Procedures({ book, costs }: CostProps) {
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

function Bands({ book }: BookProps) {
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

function SecondEye({ book }: BookProps) {
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

const PER = { eye: 'per eye', session: 'per session', course: 'per course' } as const;

function AddOns({ book, costs }: CostProps) {
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

function Aftercare({ book }: BookProps) {
  return (
    <Section title="Aftercare and enhancement cover">
      <DefinitionRows
        rows={[
          ...book.followUps.map((each) => ({
            label: (
              <>
                {each.label}
                <span className="block text-small text-soft">
                  {PER[each.per]}: {each.visits.map((visit) => visit.label).join(', ')}
                </span>
              </>
            ),
            value: <Money amount={each.priceMinor} currency={book.currency} alone />,
          })),
          ...book.covers.map((each) => ({
            label: (
              <>
                {each.label}
                <span className="block max-w-prose text-small text-soft">{coverWords(each).join('; ')}</span>
                <span className="block text-small text-soft">
                  out of cover{' '}
                  {each.priceOutOfCoverMinor === null
                    ? 'not priced'
                    : chargeWords({ kind: 'amount', amountMinor: each.priceOutOfCoverMinor }, book.currency)}
                  {each.carriesDiscount ? ', less the patient’s discount' : ''}
                </span>
              </>
            ),
            value: (
              <>
                <Money amount={each.priceMinor} currency={book.currency} alone />{' '}
                <span className="text-small text-soft">per eye</span>
              </>
            ),
          })),
        ]}
      />
    </Section>
  );
}

function Packages({ book }: BookProps) {
  if (book.packages.length === 0) return null;
  return (
    <Section title="Packages">
      <DefinitionRows
        rows={book.packages.map((each) => ({
          label: (
            <>
              {each.label}{' '}
              <span className="text-small text-soft">
                {each.eyes === 'both' ? 'both eyes' : 'one eye'}, {procedureWords(book, each.procedureIds)}
              </span>
              <span className="block max-w-prose text-small text-soft">
                With {each.included.join(', ').replace(/^./, (letter) => letter.toLowerCase())}
                {each.notIncluded.length > 0 ? `; without ${each.notIncluded.join(', ')}` : ''}
                {each.mayCostMore ? '' : '; never dearer than its parts'}
              </span>
            </>
          ),
          value: chargeWords(each.price, book.currency),
        }))}
      />
    </Section>
  );
}

function Reductions({ book }: BookProps) {
  if (book.priceLists.length + book.discounts.length === 0) return null;
  return (
    <Section title="Price lists and discounts">
      <DefinitionRows
        rows={[
          ...book.priceLists.map((list) => ({
            label: (
              <>
                {list.label}
                <span className="block text-small text-soft">
                  {[
                    list.evidence,
                    list.combinesWithDiscounts ? 'combines with discounts' : 'no discount beside it',
                  ]
                    .filter(Boolean)
                    .join('; ')}
                </span>
              </>
            ),
            value:
              list.rule.kind === 'rate' ? (
                <>
                  {chargeWords({ kind: 'rate', rateBp: list.rule.rateBp }, book.currency)}
                  <span className="block text-small text-soft">off {scopeWords(list.rule.scope, book)}</span>
                </>
              ) : (
                <ul>
                  {Object.entries(list.rule.prices).map(([id, amountMinor]) => (
                    <li key={id}>
                      <span className="mr-3 text-small text-soft">{namesOf(book.procedures, [id])}</span>
                      <Money amount={amountMinor} currency={book.currency} />
                    </li>
                  ))}
                </ul>
              ),
          })),
          ...book.discounts.map((discount) => ({
            label: (
              <>
                {discount.reason}
                {discount.aftercare ? (
                  <span className="block text-small text-soft">{discount.aftercare.words}</span>
                ) : null}
              </>
            ),
            value: limitWords(discount, book.currency),
          })),
        ]}
      />
    </Section>
  );
}

function Paying({ book }: BookProps) {
  const { deposit } = book;
  const limits = [
    deposit.floorMinor === null
      ? null
      : `at least ${chargeWords({ kind: 'amount', amountMinor: deposit.floorMinor }, book.currency)}`,
    deposit.ceilingMinor === null
      ? null
      : `at most ${chargeWords({ kind: 'amount', amountMinor: deposit.ceilingMinor }, book.currency)}`,
  ].filter((each) => each !== null);
  return (
    <Section title="Paying">
      <DefinitionRows
        rows={[
          {
            label: 'Deposit on accepting',
            value: [chargeWords(deposit.charge, book.currency), ...limits].join(', '),
          },
          { label: 'Balance', value: daysBeforeWords(book.balanceDueDays) },
          ...book.paymentPlans.map((plan) => ({ label: plan.label, value: planWords(plan) })),
        ]}
      />
    </Section>
  );
}

function Ladder({ book }: BookProps) {
  const { cancellation } = book;
  return (
    <Section title="Kept per eye if it is cancelled">
      <DefinitionRows
        rows={[
          { label: `Within ${cancellation.reflectionDays} days of accepting`, value: 'nothing' },
          ...cancellation.rungs.map((rung) => ({
            label: rungWords(rung.minDaysBefore).replace(/^./, (letter) => letter.toUpperCase()),
            value: chargeWords(rung.kept, book.currency),
          })),
          { label: 'Does not come', value: chargeWords(cancellation.noShow, book.currency) },
          { label: 'Found unsuitable, or the clinic cancels', value: 'nothing, on any day' },
          {
            label: 'Moves the day',
            value: `${cancellation.reschedule.freeMoves} free, then ${chargeWords(cancellation.reschedule.fee, book.currency)}`,
          },
        ]}
      />
    </Section>
  );
}

function TaxAndTerms({ book }: BookProps) {
  return (
    <Section title="Tax and terms">
      <DefinitionRows
        rows={[
          ...book.taxClasses.map((tax) => ({ label: tax.label, value: taxWords(tax) })),
          { label: 'A quote is good for', value: `${book.validityDays} days` },
          {
            label: 'Income is recognised',
            value:
              book.allocationPolicy === 'A'
                ? 'all at each eye’s surgery'
                : 'promise by promise, by stand-alone price',
          },
          { label: 'Never included', value: book.notIncluded.join(', ') || 'nothing named' },
        ]}
      />
    </Section>
  );
}
