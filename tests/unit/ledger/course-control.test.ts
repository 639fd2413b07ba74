import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  type CourseTotals,
  cancellationEntry,
  courseControl,
  deliveryEntry,
  disputeLostEntry,
  type EntryDraft,
  impairmentEntry,
  receiptEntry,
  refundOrderedEntry,
  taxEntry,
  trialBalance,
} from '#domain/ledger/index';
import { minor } from '#domain/money/index';
import { CASES } from '#tests/factories/cases';
import { header } from '#tests/factories/entries';

type Act =
  | { act: 'pay' | 'deliver' | 'refund' | 'lose' | 'write_off' | 'tax'; amount: number }
  | { act: 'cancel'; kept: number; refund: number };

const amount = fc.integer({ min: 1, max: 500_000 });
const anyAct: fc.Arbitrary<Act> = fc.oneof(
  fc.record({
    act: fc.constantFrom('pay', 'deliver', 'refund', 'lose', 'write_off', 'tax' as const),
    amount,
  }),
  fc.record({ act: fc.constant('cancel' as const), kept: amount, refund: amount }),
) as fc.Arbitrary<Act>;

/** A course whose books are kept by entries and whose records are counted beside them, in plain numbers. */
class Course {
  readonly entries: EntryDraft[] = [];
  readonly records = { applied: 0, tax: 0, recognised: 0, refunds: 0, disputes: 0, writtenOff: 0 };

  balance(account: string): number {
    return trialBalance(this.entries).find((row) => row.account === account)?.balanceMinor ?? 0;
  }

  totals(): CourseTotals {
    const { records } = this;
    return {
      liabilityMinor: minor(-this.balance('2000')),
      receivableMinor: minor(this.balance('1130')),
      appliedMinor: minor(records.applied),
      taxMinor: minor(records.tax),
      recognisedMinor: minor(records.recognised),
      refundsOrderedMinor: minor(records.refunds),
      disputeLossesMinor: minor(records.disputes),
      writtenOffMinor: minor(records.writtenOff),
    };
  }

  take(act: Act): void {
    const { records } = this;
    const of = { ...header(), courseId: 1, liabilityMinor: minor(-this.balance('2000')) };
    const receivableMinor = minor(this.balance('1130'));
    if (act.act === 'cancel') {
      const { kept, refund } = act;
      this.entries.push(
        cancellationEntry({ ...of, keptMinor: minor(kept), taxMinor: minor(0), refundMinor: minor(refund) }),
      );
      records.recognised += kept;
      records.refunds += refund;
      return;
    }
    const amountMinor = minor(act.amount);
    const none = minor(0);
    if (act.act === 'pay') {
      const tenders = [{ tender: 'card_machine' as const, amountMinor }];
      const rest = { changeMinor: none, roundingMinor: none, creditMinor: none, receivableMinor };
      this.entries.push(receiptEntry({ ...of, tenders, appliedMinor: amountMinor, ...rest }));
      records.applied += act.amount;
    } else if (act.act === 'deliver') {
      const what = { obligationId: 1, eye: 'OD' as const, incomeAccount: '4010', taxMinor: minor(3) };
      this.entries.push(deliveryEntry({ ...of, ...what, amountMinor }));
      records.recognised += act.amount;
      records.tax += 3;
    } else if (act.act === 'refund') {
      this.entries.push(refundOrderedEntry({ ...of, fromCourseMinor: amountMinor, fromCreditMinor: none }));
      records.refunds += act.amount;
    } else if (act.act === 'lose') {
      this.entries.push(disputeLostEntry({ ...of, amountMinor }));
      records.disputes += act.amount;
    } else if (act.act === 'tax') {
      this.entries.push(taxEntry({ ...of, taxMinor: amountMinor }));
      records.tax += act.amount;
    } else {
      const off = Math.min(act.amount, receivableMinor);
      if (off <= 0) return;
      this.entries.push(impairmentEntry({ ...of, amountMinor: minor(off) }));
      records.writtenOff += off;
    }
  }
}

describe('courseControl', () => {
  test('any history of a course · after each step · holds, and only one side of it is open (invariant 10)', () => {
    fc.assert(
      fc.property(fc.array(anyAct, { maxLength: 12 }), (acts) => {
        const course = new Course();
        for (const act of acts) {
          course.take(act);
          const totals = course.totals();
          expect(courseControl(totals).differenceMinor).toBe(0);
          expect(totals.liabilityMinor >= 0 && totals.receivableMinor >= 0).toBe(true);
          expect(totals.liabilityMinor === 0 || totals.receivableMinor === 0).toBe(true);
        }
      }),
      { numRuns: CASES },
    );
  });
  test('records that miss a receipt · against the books · show the difference and both figures', () => {
    const course = new Course();
    course.take({ act: 'pay', amount: 499_000 });
    course.take({ act: 'deliver', amount: 220_553 });
    const control = courseControl({ ...course.totals(), appliedMinor: minor(400_000) });
    expect(control.differenceMinor).toBe(99_000);
    expect(control.why.steps.map(({ label, amountMinor }) => [label, amountMinor])).toEqual([
      ['Paid towards the course', 400_000],
      ['Tax', -3],
      ['Recognised as income', -220_553],
      ['By the records', 179_444],
      ['By the books, 2000 less 1130', 278_444],
    ]);
  });
});
