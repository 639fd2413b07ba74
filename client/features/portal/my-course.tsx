import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useEffect } from 'react';
import { useSearchParams } from 'react-router-dom';
import { call, pathOf } from '#client/api/call.ts';
import { Button } from '#client/ui/button.tsx';
import { Money, moneyText } from '#client/ui/money.tsx';
import { PairMark } from '#client/ui/pair-mark.tsx';
import { StateWord } from '#client/ui/states.tsx';
import { getMyCheckout, getMyReceipt, type PatientQuote } from '#contract/portal';
import { formatDayShort } from '#domain/time/index';
import { payNow } from './pay-now.ts';
import { myQuoteQuery } from './queries.ts';

type Course = NonNullable<PatientQuote['course']>;

/** After accepting: what is paid, what is next, the receipts. */
export function MyCourse({ quote, course }: { readonly quote: PatientQuote; readonly course: Course }) {
  return (
    <section aria-label="Your course of care">
      <h1 className="mt-4">
        {course.leftMinor === 0 ? 'Everything is paid' : `Thank you, ${quote.givenName}`}
      </h1>
      <ReturnedFromPayment quote={quote} />
      <p className="mt-3 flex items-center gap-3">
        <PairMark eyes={course.eyes} size="large" />
        <span className="text-soft">
          {course.eyes
            .map(
              (eye) =>
                `${eye.eye === 'OD' ? 'right' : 'left'} eye ${eye.state}${eye.plannedOn && eye.state === 'planned' ? ` for ${formatDayShort(eye.plannedOn)}` : ''}`,
            )
            .join(', ')}
        </span>
      </p>
      <dl className="mt-4">
        {course.dues.map((due) => (
          <div
            key={due.dueNo}
            className="flex items-baseline justify-between gap-4 border-b border-rule py-2.5"
          >
            <dt>
              {due.label}
              {due.dueOn ? (
                <span className="block text-small text-soft">by {formatDayShort(due.dueOn)}</span>
              ) : null}
            </dt>
            <dd className="text-right">
              <Money amount={due.amountMinor} currency={quote.currency} />
              <span className="block">
                {due.paidMinor >= due.amountMinor ? (
                  <StateWord tone="settled">paid</StateWord>
                ) : (
                  <StateWord tone="waiting">awaited</StateWord>
                )}
              </span>
            </dd>
          </div>
        ))}
      </dl>
      <Pay quote={quote} course={course} />
      {course.receipts.length > 0 ? (
        <>
          <h2 className="mt-8">Receipts</h2>
          <ul>
            {course.receipts.map((receipt) => (
              <li key={receipt.receiptId} className="flex justify-between gap-4 border-b border-rule py-2.5">
                <a
                  href={pathOf(getMyReceipt, { params: { receiptId: receipt.receiptId } })}
                  target="_blank"
                  rel="noreferrer"
                >
                  {receipt.number}
                </a>
                <span className="text-soft">{formatDayShort(receipt.occurredOn)}</span>
                {receipt.voided ? (
                  <StateWord tone="wrong">void</StateWord>
                ) : (
                  <Money amount={receipt.totalMinor} currency={quote.currency} />
                )}
              </li>
            ))}
          </ul>
        </>
      ) : null}
    </section>
  );
}

function Pay({ quote, course }: { readonly quote: PatientQuote; readonly course: Course }) {
  const deposit = course.dues.find((due) => due.kind === 'deposit');
  const depositLeft = deposit ? deposit.amountMinor - deposit.paidMinor : 0;
  const purpose = depositLeft > 0 ? 'deposit' : 'balance';
  const amount = depositLeft > 0 ? depositLeft : course.leftMinor;
  const pay = useMutation({ mutationFn: () => payNow(purpose, amount) });
  if (amount <= 0) return null;
  return (
    <div className="mt-6">
      <Button
        kind="primary"
        sending={pay.isPending}
        onPress={() => pay.mutate()}
        className="min-h-13 w-full text-lead"
      >
        Pay {purpose === 'deposit' ? 'the deposit of' : 'the rest,'} {moneyText(amount, quote.currency, true)}
      </Button>
      {pay.error ? (
        <p role="alert" className="mt-3 font-semibold text-bengal">
          {pay.error.message}
        </p>
      ) : null}
    </div>
  );
}

const POLL_MS = 1_500;

/** The hosted page sends the payer back before, after or without the clinic having heard: the truth is asked for, and told as it stands. */
function ReturnedFromPayment({ quote }: { readonly quote: PatientQuote }) {
  const [search] = useSearchParams();
  const client = useQueryClient();
  const attemptKey = search.get('attempt');
  const turnedBack = search.get('turned-back') !== null;
  const checkout = useQuery({
    queryKey: ['my-checkout', attemptKey],
    enabled: attemptKey !== null,
    queryFn: ({ signal }) => call(getMyCheckout, { params: { attemptKey: attemptKey ?? '' } }, signal),
    refetchInterval: (query) => (query.state.data?.state === 'open' && !turnedBack ? POLL_MS : false),
  });
  const state = checkout.data?.state;
  useEffect(() => {
    if (state === 'paid') client.invalidateQueries(myQuoteQuery).catch(() => undefined);
  }, [state, client]);
  if (attemptKey === null || !checkout.data) return null;
  const amount = moneyText(checkout.data.amountMinor, quote.currency, true);
  if (state === 'paid') {
    return (
      <p role="status" className="mt-3 border-y-2 border-lissamine py-3 font-semibold text-lissamine">
        {amount} received. The receipt is on its way by e-mail.
      </p>
    );
  }
  if (state === 'open' && !turnedBack) {
    return (
      <p role="status" className="mt-3 border-y-2 border-povidone py-3 font-semibold text-povidone">
        Confirming your payment of {amount} with the card page…
      </p>
    );
  }
  return (
    <p role="status" className="mt-3 border-y-2 border-povidone py-3 font-semibold text-povidone">
      {turnedBack
        ? 'You came back without paying. Nothing was charged; you can pay whenever you like.'
        : 'This payment did not go through. Nothing was charged; you can try again.'}
    </p>
  );
}
