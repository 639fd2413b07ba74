import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { currencyCode, minor } from '#domain/money/index';
import { cashStepOf, type PaymentAsked, type Tender, takePayment } from '#domain/payments/index';
import { CASES } from '#tests/factories/cases';

type Given = [Tender, number];
const asked = (leftMinor: number, given: Given[], over: Partial<PaymentAsked> = {}): PaymentAsked => ({
  leftMinor: minor(leftMinor),
  tenders: given.map(([tender, amount]) => ({ tender, amountMinor: minor(amount) })),
  cashStepMinor: 1,
  ...over,
});

/** applied, credit, change, rounding */
const figures = (plan: PaymentAsked) => {
  const taken = takePayment(plan);
  return taken.ok
    ? [taken.appliedMinor, taken.creditMinor, taken.changeMinor, taken.roundingMinor]
    : taken.refusals;
};

describe('takePayment', () => {
  test.each<[string, PaymentAsked, number[]]>([
    ['exact by card', asked(4_491, [['card_machine', 4_491]]), [4_491, 0, 0, 0]],
    ['part payment in cash', asked(4_491, [['cash', 1_000]]), [1_000, 0, 0, 0]],
    ['cash above what is left', asked(4_491, [['cash', 5_000]]), [4_491, 0, 509, 0]],
    [
      'card first, cash for the rest with change',
      asked(4_491, [
        ['cash', 500],
        ['card_machine', 4_000],
      ]),
      [4_491, 0, 9, 0],
    ],
    ['card above what is left', asked(4_491, [['card_machine', 5_000]]), [4_491, 509, 0, 0]],
    [
      'cash for a part that is asked',
      asked(4_491, [['cash', 1_000]], { askedMinor: minor(999) }),
      [999, 0, 1, 0],
    ],
    ['more asked than is left', asked(50, [['cash', 100]], { askedMinor: minor(80) }), [50, 30, 20, 0]],
    [
      'credit spent beside a card',
      asked(
        200,
        [
          ['credit', 80],
          ['card_machine', 120],
        ],
        { onAccountMinor: minor(90) },
      ),
      [200, 0, 0, 0],
    ],
    [
      'cash rounded down for the payer',
      asked(1_002, [['cash', 1_000]], { cashStepMinor: 5 }),
      [1_002, 0, 0, 2],
    ],
    [
      'cash rounded up for the clinic',
      asked(1_003, [['cash', 1_005]], { cashStepMinor: 5 }),
      [1_003, 0, 0, -2],
    ],
    [
      'rounding and change together',
      asked(1_003, [['cash', 2_000]], { cashStepMinor: 5 }),
      [1_003, 0, 995, -2],
    ],
    ['half a step', asked(50, [['cash', 100]], { cashStepMinor: 100 }), [50, 0, 0, -50]],
    ['no rounding of a part payment', asked(1_003, [['cash', 500]], { cashStepMinor: 5 }), [500, 0, 0, 0]],
    [
      'no rounding without cash',
      asked(1_003, [['card_machine', 1_003]], { cashStepMinor: 5 }),
      [1_003, 0, 0, 0],
    ],
  ])('%s', (_, plan, expected) => {
    expect(figures(plan)).toEqual(expected);
  });

  test.each<[string, PaymentAsked, [string, string][]]>([
    ['nothing', asked(100, []), [['tenders', 'no_tender']]],
    ['nothing of a tender', asked(100, [['card_machine', 0]]), [['tenders.0.amountMinor', 'not_positive']]],
    [
      'below nothing',
      asked(100, [
        ['card_machine', 50],
        ['cash', -5],
      ]),
      [['tenders.1.amountMinor', 'not_positive']],
    ],
    ['online card', asked(100, [['online_card', 100]]), [['tenders.0.tender', 'online_at_the_desk']]],
    [
      'cash without coins',
      asked(100, [['cash', 98]], { cashStepMinor: 5 }),
      [['tenders.0.amountMinor', 'not_in_cash_steps']],
    ],
    [
      'cash nobody needs',
      asked(100, [
        ['card_machine', 100],
        ['cash', 50],
      ]),
      [['tenders.1.amountMinor', 'cash_not_needed']],
    ],
    [
      'cash for less than a coin',
      asked(
        102,
        [
          ['card_machine', 100],
          ['cash', 5],
        ],
        { cashStepMinor: 5 },
      ),
      [['tenders.1.amountMinor', 'cash_not_needed']],
    ],
    [
      'credit that is not there',
      asked(100, [['credit', 50]], { onAccountMinor: minor(49) }),
      [['tenders.0.amountMinor', 'more_than_on_account']],
    ],
    [
      'credit on a paid course',
      asked(10, [['credit', 50]], { onAccountMinor: minor(90) }),
      [['tenders.0.amountMinor', 'credit_not_needed']],
    ],
  ])('%s · is refused · naming the field', (_, plan, expected) => {
    const taken = takePayment(plan);
    expect(taken.ok ? [] : taken.refusals.map(({ field, code }) => [field, code])).toEqual(expected);
  });

  const anyPlan = fc
    .record({
      step: fc.constantFrom(1, 5, 10, 50, 100),
      left: fc.nat({ max: 1_000_000 }),
      given: fc.array(
        fc.record({
          tender: fc.constantFrom<Tender>(
            'cash',
            'card_machine',
            'bank_transfer',
            'cheque',
            'lender',
            'credit',
          ),
          amount: fc.nat({ max: 1_000_000 }),
        }),
        { maxLength: 4 },
      ),
      account: fc.nat({ max: 1_000_000 }),
      part: fc.option(fc.nat({ max: 1_000_000 })),
    })
    .map(({ step, left, given, account, part }) =>
      asked(
        left,
        given.map(
          ({ tender, amount }): Given => [tender, tender === 'cash' ? amount - (amount % step) : amount],
        ),
        {
          cashStepMinor: step,
          onAccountMinor: minor(account),
          ...(part === null ? {} : { askedMinor: minor(part) }),
        },
      ),
    );

  test('any payment that is taken · adds up, gives change from cash alone and rounds under a step (invariant 5)', () => {
    let taken = 0;
    fc.assert(
      fc.property(anyPlan, (plan) => {
        const result = takePayment(plan);
        if (!result.ok) return;
        taken += 1;
        const total = (tender?: Tender) =>
          plan.tenders.reduce(
            (all, each) => all + (tender && each.tender !== tender ? 0 : each.amountMinor),
            0,
          );
        expect(result.totalMinor).toBe(total() - result.changeMinor + result.roundingMinor);
        expect(result.totalMinor).toBe(result.appliedMinor + result.creditMinor);
        expect(result.appliedMinor <= plan.leftMinor && result.creditMinor >= 0).toBe(true);
        expect(result.changeMinor >= 0 && result.changeMinor < Math.max(1, total('cash'))).toBe(true);
        expect(result.changeMinor % plan.cashStepMinor).toBe(0);
        expect(Math.abs(result.roundingMinor) * 2 <= plan.cashStepMinor).toBe(true);
        if (total('cash') === 0 || plan.cashStepMinor === 1) expect(result.roundingMinor).toBe(0);
      }),
      { numRuns: CASES },
    );
    expect(taken).toBeGreaterThan(CASES / 10);
  });

  test('a currency · without small coins · has a step, others round nothing', () => {
    const step = (code: string) => cashStepOf(currencyCode(code));
    expect([step('CHF'), step('SEK'), step('EUR'), step('JPY')]).toEqual([5, 100, 1, 1]);
  });
});
