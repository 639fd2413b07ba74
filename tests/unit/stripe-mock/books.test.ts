import { describe, expect, test } from 'vitest';
import { book } from '#stand-ins/stripe-mock/objects/balance';
import { checkBooks } from '#stand-ins/stripe-mock/objects/books';
import { attachFee, confirmPayment } from '#stand-ins/stripe-mock/objects/payments';
import { payOut } from '#stand-ins/stripe-mock/objects/payouts';
import { createRefund } from '#stand-ins/stripe-mock/objects/refunds';
import { openSession } from '#stand-ins/stripe-mock/objects/sessions';
import { createService } from '#stand-ins/stripe-mock/service';
import { openStoreInMemory } from '#stand-ins/stripe-mock/state/log-file';

/** Books with a charge, a refund and a payout that are right until a test spoils them. */
function booksInOrder() {
  const { store } = openStoreInMemory();
  const service = createService(store, {
    secretKey: 'k',
    currency: 'eur',
    webhookUrl: null,
    webhookSecret: 's',
  });
  service.clock.place(Date.parse('2026-03-02T09:00:00Z'), true);
  store.transact(() => {
    const { id } = openSession(service, {
      items: [{ name: 'Deposit', unitAmount: 50_000, quantity: 1 }],
      currency: 'eur',
      expiresAt: service.clock.nowSeconds() + 3_600,
      successUrl: 'http://127.0.0.1/',
      cancelUrl: null,
      clientReferenceId: null,
      customer: null,
      customerEmail: null,
      metadata: {},
      intentMetadata: {},
      intentDescription: null,
      receiptEmail: null,
      locale: null,
      submitType: null,
      allowedPaymentMethodTypes: null,
      adaptivePricing: false,
    });
    confirmPayment(service, id, {
      number: '4242424242424242',
      expMonth: 12,
      expYear: 2030,
      payer: { email: null, name: 'Ana' },
    });
  });
  const [charge] = store.all('charges');
  if (charge === undefined) throw new Error('No charge was made');
  store.transact(() => attachFee(service, charge.id));
  service.clock.place(Date.parse('2026-03-05T09:00:00Z'), true);
  const refund = store.transact(() =>
    createRefund(service, {
      charge: charge.id,
      paymentIntent: null,
      amount: 10_000,
      reason: null,
      metadata: {},
    }),
  );
  const [payout] = store.transact(() => payOut(service));
  if (payout === undefined) throw new Error('No payout was made');
  return { service, store, charge, refund, payout };
}

describe('checkBooks', () => {
  test('in order · nothing to tell', () => {
    expect(checkBooks(booksInOrder().service)).toEqual([]);
  });

  test('a payout changed · named', () => {
    const { service, store, payout } = booksInOrder();
    store.transact(() => store.put('payouts', { ...payout, amount: payout.amount + 1 }));
    expect(checkBooks(service).join()).toContain(payout.id);
  });

  test('a row taken out · its payout no longer nets to nothing', () => {
    const { service, store, payout } = booksInOrder();
    const row = store.all('balanceTransactions').find(({ type }) => type === 'refund');
    store.transact(() => store.remove('balanceTransactions', row?.id ?? ''));
    expect(checkBooks(service)).toHaveLength(2);
    expect(checkBooks(service).join()).toContain(payout.id);
  });

  test('a charge booked twice · named', () => {
    const { service, store, charge } = booksInOrder();
    store.transact(() =>
      book(service, {
        type: 'charge',
        reportingCategory: 'charge',
        amount: charge.amount,
        currency: 'eur',
        source: charge.id,
      }),
    );
    expect(checkBooks(service).join()).toContain(charge.id);
  });

  test('a refund that failed without giving back · named', () => {
    const { service, store, refund } = booksInOrder();
    store.transact(() => store.put('refunds', { ...refund, status: 'failed' }));
    expect(checkBooks(service).join()).toContain(refund.id);
  });

  test('more refunded than charged · named', () => {
    const { service, store, refund, charge } = booksInOrder();
    store.transact(() => store.put('refunds', { ...refund, amount: 50_001 }));
    expect(checkBooks(service).join()).toContain(charge.id);
  });
});
