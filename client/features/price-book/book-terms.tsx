import { Money } from '#client/ui/money.tsx';
import { DefinitionRows, Section } from '#client/ui/page.tsx';
import { daysBeforeWords, type PriceBook } from '#domain/pricing/index';
import {
  chargeWords,
  coverWords,
  limitWords,
  namesOf,
  PER,
  planWords,
  procedureWords,
  rungWords,
  scopeWords,
  taxWords,
} from './words.ts';

type BookProps = { readonly book: PriceBook };

/** Visits after surgery, and the cover for a later touch-up. */
export function Aftercare({ book }: BookProps) {
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

/** Bundles at one price. */
export function Packages({ book }: BookProps) {
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

/** Prices for some, and what may be taken off for a reason. */
export function Reductions({ book }: BookProps) {
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

/** Deposit, balance, and ways to pay over time. */
export function Paying({ book }: BookProps) {
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

/** What is kept when plans change. */
export function Ladder({ book }: BookProps) {
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

/** Tax classes and what else a quote says. */
export function TaxAndTerms({ book }: BookProps) {
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
