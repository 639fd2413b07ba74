import { describe, expect, test } from 'vitest';
import { minor } from '#domain/money/index';
import {
  CHECKOUT,
  type CheckoutDue,
  checkCashLimit,
  checkoutAmount,
  LIVE_CHECKOUTS,
} from '#domain/payments/index';
import { refusedSteps, takeStep } from '#domain/state-machine';
import { clinicDate } from '#domain/time/index';

const due = (dueNo: number, kind: CheckoutDue['kind'], on: string | null, amount: number): CheckoutDue => ({
  dueNo,
  kind,
  label: kind,
  dueOn: on === null ? null : clinicDate(on),
  amountMinor: minor(amount),
});

describe('checkoutAmount', () => {
  const dues = [
    due(1, 'deposit', '2026-03-01', 499),
    due(2, 'balance', '2026-04-03', 2_491),
    due(3, 'lender', '2026-04-03', 2_000),
  ];
  const ask = (purpose: 'deposit' | 'balance', paid: number, lenderPaid: number, today = '2026-03-05') => {
    const answer = checkoutAmount({
      purpose,
      dues,
      paidMinor: minor(paid),
      lenderPaidMinor: minor(lenderPaid),
      today: clinicDate(today),
    });
    return answer.ok ? answer.amountMinor : answer.code;
  };
  test.each<[string, number | string, number | string]>([
    ['the deposit', ask('deposit', 0, 0), 499],
    ['what is left of the deposit', ask('deposit', 100, 0), 399],
    ['nothing, the deposit being paid', ask('deposit', 499, 0), 'nothing_due'],
    ['the balance once it is due', ask('deposit', 499, 0, '2026-04-03'), 2_491],
    ['everything of the patient, due or not', ask('balance', 499, 0), 2_491],
    ['nothing of the lender', ask('balance', 2_990, 0), 'nothing_due'],
    ['all of the patient, the lender having paid its part', ask('balance', 2_000, 2_000), 2_990],
  ])('asks for %s', (_, amount, expected) => {
    expect(amount).toBe(expected);
  });
  test('a sum · with its derivation · ends at the sum asked for', () => {
    const answer = checkoutAmount({
      purpose: 'balance',
      dues,
      paidMinor: minor(499),
      lenderPaidMinor: minor(0),
      today: clinicDate('2026-03-05'),
    });
    expect(answer.ok && answer.why.steps.map(({ label, amountMinor }) => [label, amountMinor])).toEqual([
      ['deposit', 499],
      ['balance', 2_491],
      ['Paid', -499],
      ['Left to pay', 2_491],
    ]);
  });
  test('what is due today · with its derivation · counts what falls due today and not what does tomorrow', () => {
    const answer = checkoutAmount({
      purpose: 'deposit',
      dues,
      paidMinor: minor(100),
      lenderPaidMinor: minor(0),
      today: clinicDate('2026-03-01'),
    });
    expect(answer.ok && answer.why.steps).toEqual([
      { label: 'deposit', amountMinor: 499, text: 'due 2026-03-01' },
      { label: 'Paid', amountMinor: -100 },
      { label: 'Due now', amountMinor: 399 },
    ]);
  });
});

describe('a checkout’s life', () => {
  test.each(refusedSteps(CHECKOUT))('%s to %s · is refused · by name', (from, to) => {
    expect(takeStep(CHECKOUT, from, to)).toMatchObject({ ok: false, code: `checkout_${from}_to_${to}` });
  });
  test('every allowed step · is taken · and no other', () => {
    const allowed = Object.values(CHECKOUT.follows).flat().length;
    expect(refusedSteps(CHECKOUT)).toHaveLength(8 * 8 - allowed);
    expect(takeStep(CHECKOUT, 'made', 'open')).toEqual({ ok: true });
  });
  test('money that came · whatever we thought · can be recorded once', () => {
    const others = Object.keys(CHECKOUT.follows).filter(
      (state) => state !== 'paid',
    ) as (keyof typeof CHECKOUT.follows)[];
    expect(others.every((state) => takeStep(CHECKOUT, state, 'paid').ok)).toBe(true);
    expect(CHECKOUT.follows.paid).toEqual([]);
  });
  test('a checkout that ended · never · stands in the way again', () => {
    const ended = ['paid', 'expired', 'failed', 'superseded', 'quarantined'] as const;
    for (const state of ended) {
      expect(LIVE_CHECKOUTS).not.toContain(state);
      expect(CHECKOUT.follows[state].some((next) => LIVE_CHECKOUTS.includes(next))).toBe(false);
    }
  });
});

describe('checkCashLimit', () => {
  const limit = { warnMinor: minor(500_000), refuseMinor: minor(1_000_000) };
  test.each<[number[], number, string]>([
    [[], 500_000, 'within'],
    [[], 500_001, 'warned'],
    [[300_000, 200_000], 1, 'warned'],
    [[600_000], 400_000, 'warned'],
    [[600_000, 300_000], 100_001, 'refused'],
    [[], 1_000_001, 'refused'],
  ])('%j before and %i now · is %s', (before, now, answer) => {
    expect(checkCashLimit(limit, before.map(minor), minor(now)).answer).toBe(answer);
  });
  test('a refusal · says · how it was reached', () => {
    const refused = checkCashLimit(limit, [minor(600_000), minor(300_000)], minor(200_000));
    expect(
      refused.answer !== 'within' && refused.why.steps.map(({ label, amountMinor }) => [label, amountMinor]),
    ).toEqual([
      ['2 receipts before', 900_000],
      ['This one', 200_000],
      ['Together', 1_100_000],
      ['Limit', 1_000_000],
    ]);
  });
});
