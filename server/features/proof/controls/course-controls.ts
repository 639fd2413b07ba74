import { ACCOUNT, courseControl } from '#domain/ledger/index';
import { type Minor, minor, ZERO } from '#domain/money/index';
import { rawRows, readMinor, type Trx } from '#server/platform/db';
import type { ProofControl, ProofScope } from '../control.ts';

interface CourseRow {
  course_id: number;
  number: string;
  liability: unknown;
  receivable: unknown;
  applied: unknown;
  recognised: unknown;
  tax: unknown;
}

async function courseRows(trx: Trx, { asOf }: ProofScope): Promise<CourseRow[]> {
  return await rawRows<CourseRow>(
    trx,
    `SELECT c.course_id, c.number, l.liability, l.receivable, r.applied, g.recognised, g.tax
     FROM courses c
     LEFT JOIN (SELECT course_id, -SUM(IF(account_code = ?, amount_minor, 0)) AS liability,
                       SUM(IF(account_code = ?, amount_minor, 0)) AS receivable
                FROM journal_lines WHERE course_id IS NOT NULL AND booked_on <= ? GROUP BY course_id) l ON l.course_id = c.course_id
     LEFT JOIN (SELECT x.course_id, SUM(x.applied_minor) AS applied FROM receipts x
                LEFT JOIN receipt_voids v ON v.receipt_id = x.receipt_id AND v.booked_on <= ?
                WHERE x.booked_on <= ? AND v.receipt_id IS NULL GROUP BY x.course_id) r ON r.course_id = c.course_id
     LEFT JOIN (SELECT o.course_id, SUM(n.amount_minor) AS recognised, SUM(n.tax_minor) AS tax
                FROM recognitions n JOIN obligations o ON o.obligation_id = n.obligation_id
                WHERE n.booked_on <= ? GROUP BY o.course_id) g ON g.course_id = c.course_id
     ORDER BY c.course_id`,
    [ACCOUNT.contractLiability, ACCOUNT.patientReceivable, asOf, asOf, asOf, asOf],
  );
}

/** 2000 − 1130 of each course = applied − tax − recognised … (invariant 10). */
const courses: ProofControl = {
  id: 'courses',
  title: 'Each course',
  leftWords: '2000 less 1130 by the books',
  rightWords: 'paid, less tax, less what was earned, by the records',
  kind: 'sums',
  async compute(trx, scope) {
    return (await courseRows(trx, scope)).map((row) => {
      const control = courseControl({
        liabilityMinor: readMinor(row.liability),
        receivableMinor: readMinor(row.receivable),
        appliedMinor: readMinor(row.applied),
        taxMinor: readMinor(row.tax),
        recognisedMinor: readMinor(row.recognised),
        refundsOrderedMinor: ZERO,
        disputeLossesMinor: ZERO,
        writtenOffMinor: ZERO,
      });
      return {
        label: `Course ${row.number}`,
        leftMinor: control.booksMinor,
        rightMinor: control.recordsMinor,
        link: `/courses/${row.course_id}`,
      };
    });
  },
};

/** Income accounts against the promises kept. */
const income: ProofControl = {
  id: 'income',
  title: 'Income recognised',
  leftWords: 'accounts 4000 to 4070',
  rightWords: 'promises delivered, by obligation',
  kind: 'sums',
  async compute(trx, { asOf }) {
    const rows = await rawRows<{ account_code: string; books: unknown; records: unknown }>(
      trx,
      `SELECT account_code, SUM(books) AS books, SUM(records) AS records FROM (
         SELECT account_code, -SUM(amount_minor) AS books, 0 AS records FROM journal_lines
         WHERE account_code BETWEEN '4000' AND '4099' AND booked_on <= ? GROUP BY account_code
         UNION ALL
         SELECT o.account_code, 0, SUM(n.amount_minor) FROM recognitions n JOIN obligations o ON o.obligation_id = n.obligation_id
         WHERE n.booked_on <= ? GROUP BY o.account_code) b GROUP BY account_code ORDER BY account_code`,
      [asOf, asOf],
    );
    return rows.map((row) => ({
      label: `Account ${row.account_code}`,
      leftMinor: readMinor(row.books),
      rightMinor: readMinor(row.records),
      link: `/proof/journal?account=${row.account_code}`,
    }));
  },
};

/** Output tax against the tax that deliveries made due. */
const tax: ProofControl = {
  id: 'tax',
  title: 'Output tax',
  leftWords: 'account 2200',
  rightWords: 'tax due on what was delivered',
  kind: 'sums',
  async compute(trx, { asOf }) {
    return [
      {
        label: 'Output tax',
        leftMinor: minor(
          -(await total(
            trx,
            'SELECT SUM(amount_minor) AS total FROM journal_lines WHERE account_code = ? AND booked_on <= ?',
            [ACCOUNT.outputTax, asOf],
          )),
        ),
        rightMinor: await total(
          trx,
          'SELECT SUM(tax_minor) AS total FROM recognitions WHERE booked_on <= ?',
          [asOf],
        ),
        link: `/proof/journal?account=${ACCOUNT.outputTax}`,
      },
    ];
  },
};

/** Credit on account against what receipts took beyond the price. */
const credit: ProofControl = {
  id: 'credit',
  title: 'Credit on account',
  leftWords: 'account 2020',
  rightWords: 'receipts beyond the price, less credit used',
  kind: 'sums',
  async compute(trx, { asOf }) {
    const taken = await total(
      trx,
      `SELECT SUM(r.credit_minor) AS total FROM receipts r LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id AND v.booked_on <= ?
       WHERE r.booked_on <= ? AND v.receipt_id IS NULL`,
      [asOf, asOf],
    );
    const used = await total(
      trx,
      `SELECT SUM(t.amount_minor) AS total FROM receipt_tenders t JOIN receipts r ON r.receipt_id = t.receipt_id
       LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id AND v.booked_on <= ?
       WHERE t.tender = 'credit' AND r.booked_on <= ? AND v.receipt_id IS NULL`,
      [asOf, asOf],
    );
    const books = await total(
      trx,
      'SELECT SUM(amount_minor) AS total FROM journal_lines WHERE account_code = ? AND booked_on <= ?',
      [ACCOUNT.unappliedCredit, asOf],
    );
    return [
      {
        label: 'Credit on account',
        leftMinor: minor(-books),
        rightMinor: minor(taken - used),
        link: `/proof/journal?account=${ACCOUNT.unappliedCredit}`,
      },
    ];
  },
};

async function total(trx: Trx, sql: string, bindings: readonly unknown[]): Promise<Minor> {
  const [row] = await rawRows<{ total: unknown }>(trx, sql, bindings);
  return readMinor(row?.total);
}

export const COURSE_CONTROLS: readonly ProofControl[] = [courses, income, tax, credit];
