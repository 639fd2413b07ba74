import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  bankedEntry,
  cancellationEntry,
  cashBankedEntry,
  checkEntry,
  clawbackEntry,
  deliveryEntry,
  disputeLostEntry,
  disputeOpenedEntry,
  disputeWonEntry,
  type EntryDraft,
  feeAccruedEntry,
  feePaidEntry,
  feeSetOffEntry,
  impairmentEntry,
  lenderSettlementEntry,
  optionExpiredEntry,
  payoutEntry,
  processorFeeEntry,
  type ReceiptToBook,
  receiptEntry,
  refundExecutedEntry,
  refundOrderedEntry,
  reverseEntry,
  taxEntry,
  terminalSettlementEntry,
  tillDifferenceEntry,
  tillDropEntry,
  tillFloatEntry,
  tillPaidOutEntry,
  trialBalance,
  withholdingEntry,
} from '#domain/ledger/index';
import { minor } from '#domain/money/index';
import { TENDERS } from '#domain/payments/index';
import { clinicDate } from '#domain/time/index';
import { CASES } from '#tests/factories/cases';
import { anyEntry, balanceOf, type EUR, header } from '#tests/factories/entries';

const m = minor;
const about = header();

/** Account and amount of each line: the shape the posting rules are written in. */
const moves = (entry: EntryDraft) => entry.lines.map(({ account, amountMinor }) => [account, amountMinor]);

const receipt = (over: Partial<ReceiptToBook>): ReceiptToBook => ({
  ...about,
  courseId: 7,
  tenders: [],
  changeMinor: m(0),
  roundingMinor: m(0),
  appliedMinor: m(0),
  creditMinor: m(0),
  receivableMinor: m(0),
  ...over,
});

describe('posting rules · each row of the table · debits and credits', () => {
  const course = { ...about, courseId: 7, liabilityMinor: m(1_000) };
  const surgery = { obligationId: 3, eye: 'OD' as const, incomeAccount: '4010', taxMinor: m(0) };
  const payee = { ...about, payeeId: 2 };
  const eye = { courseId: 7, eye: 'OS' as const };
  const till = { ...about, tillId: 1, amountMinor: m(600) };
  const rows: [string, EntryDraft, [string, number][]][] = [
    [
      'deposit online',
      receiptEntry(
        receipt({ tenders: [{ tender: 'online_card', amountMinor: m(499) }], appliedMinor: m(499) }),
      ),
      [
        ['1100', 499],
        ['2000', -499],
      ],
    ],
    [
      'desk receipt over cash, card and transfer, with change, rounding, an old debt and credit on account',
      receiptEntry(
        receipt({
          tenders: [
            { tender: 'cash', amountMinor: m(500), tillId: 1 },
            { tender: 'card_machine', amountMinor: m(700) },
            { tender: 'bank_transfer', amountMinor: m(300) },
          ],
          changeMinor: m(98),
          roundingMinor: m(-2),
          appliedMinor: m(1_100),
          creditMinor: m(300),
          receivableMinor: m(250),
        }),
      ),
      [
        ['1010', 402],
        ['1110', 700],
        ['1025', 300],
        ['5135', -2],
        ['1130', -250],
        ['2000', -850],
        ['2020', -300],
      ],
    ],
    [
      'credit on account spent',
      receiptEntry(receipt({ tenders: [{ tender: 'credit', amountMinor: m(80) }], appliedMinor: m(80) })),
      [
        ['2020', 80],
        ['2000', -80],
      ],
    ],
    [
      'transfer banked',
      bankedEntry({ ...about, tender: 'bank_transfer', amountMinor: m(300) }),
      [
        ['1000', 300],
        ['1025', -300],
      ],
    ],
    [
      'cheque banked',
      bankedEntry({ ...about, tender: 'cheque', amountMinor: m(300) }),
      [
        ['1000', 300],
        ['1015', -300],
      ],
    ],
    [
      'processor fee',
      processorFeeEntry({ ...about, feeMinor: m(14) }),
      [
        ['5100', 14],
        ['1100', -14],
      ],
    ],
    [
      'payout',
      payoutEntry({ ...about, amountMinor: m(485) }),
      [
        ['1000', 485],
        ['1100', -485],
      ],
    ],
    [
      'negative payout',
      payoutEntry({ ...about, amountMinor: m(-20) }),
      [
        ['1000', -20],
        ['1100', 20],
      ],
    ],
    [
      'terminal settlement',
      terminalSettlementEntry({ ...about, grossMinor: m(700), feeMinor: m(9) }),
      [
        ['1000', 691],
        ['5100', 9],
        ['1110', -700],
      ],
    ],
    [
      'lender settles short',
      lenderSettlementEntry({ ...about, grossMinor: m(1_390), discountMinor: m(56) }),
      [
        ['1000', 1_334],
        ['5110', 56],
        ['1120', -1_390],
      ],
    ],
    [
      'eye done, all of it held',
      deliveryEntry({ ...course, ...surgery, amountMinor: m(900) }),
      [
        ['2000', 900],
        ['4010', -900],
      ],
    ],
    [
      'eye done, part of it owed',
      deliveryEntry({ ...course, ...surgery, amountMinor: m(1_400), taxMinor: m(60) }),
      [
        ['2000', 1_000],
        ['1130', 460],
        ['4010', -1_400],
        ['2200', -60],
      ],
    ],
    [
      'eye done, nothing held and a debt standing',
      deliveryEntry({ ...course, ...surgery, liabilityMinor: m(-5), amountMinor: m(10) }),
      [
        ['1130', 10],
        ['4010', -10],
      ],
    ],
    [
      'option expires',
      optionExpiredEntry({ ...course, obligationId: 4, eye: 'OD', amountMinor: m(82), taxMinor: m(0) }),
      [
        ['2000', 82],
        ['4040', -82],
      ],
    ],
    [
      'tax on a payment in advance',
      taxEntry({ ...course, taxMinor: m(95) }),
      [
        ['2000', 95],
        ['2200', -95],
      ],
    ],
    [
      'tax that comes back',
      taxEntry({ ...course, taxMinor: m(-95) }),
      [
        ['2000', -95],
        ['2200', 95],
      ],
    ],
    [
      'cancellation keeping a part',
      cancellationEntry({ ...course, keptMinor: m(250), taxMinor: m(0), refundMinor: m(700) }),
      [
        ['2000', 950],
        ['4050', -250],
        ['2010', -700],
      ],
    ],
    [
      'refund ordered from course and credit',
      refundOrderedEntry({ ...course, fromCourseMinor: m(400), fromCreditMinor: m(30) }),
      [
        ['2000', 400],
        ['2020', 30],
        ['2010', -430],
      ],
    ],
    [
      'refund to the card',
      refundExecutedEntry({ ...about, courseId: 7, tender: 'online_card', amountMinor: m(430) }),
      [
        ['2010', 430],
        ['1100', -430],
      ],
    ],
    [
      'refund in cash',
      refundExecutedEntry({ ...about, courseId: 7, tender: 'cash', tillId: 1, amountMinor: m(30) }),
      [
        ['2010', 30],
        ['1010', -30],
      ],
    ],
    [
      'dispute opened',
      disputeOpenedEntry({ ...about, amountMinor: m(499), feeMinor: m(20) }),
      [
        ['1140', 499],
        ['5120', 20],
        ['1100', -519],
      ],
    ],
    [
      'dispute won',
      disputeWonEntry({ ...about, amountMinor: m(499) }),
      [
        ['1100', 499],
        ['1140', -499],
      ],
    ],
    [
      'dispute lost, not performed',
      disputeLostEntry({ ...course, amountMinor: m(499) }),
      [
        ['2000', 499],
        ['1140', -499],
      ],
    ],
    [
      'dispute lost, performed',
      disputeLostEntry({ ...course, liabilityMinor: m(0), amountMinor: m(499) }),
      [
        ['1130', 499],
        ['1140', -499],
      ],
    ],
    [
      'written off',
      impairmentEntry({ ...about, courseId: 7, amountMinor: m(499) }),
      [
        ['5140', 499],
        ['1130', -499],
      ],
    ],
    [
      'fee accrued',
      feeAccruedEntry({ ...payee, ...eye, amountMinor: m(450) }),
      [
        ['5000', 450],
        ['2100', -450],
      ],
    ],
    [
      'clawback within what is owed',
      clawbackEntry({ ...payee, ...eye, amountMinor: m(450), payableMinor: m(900) }),
      [
        ['2100', 450],
        ['5000', -450],
      ],
    ],
    [
      'clawback from a payee who owes already',
      clawbackEntry({ ...payee, ...eye, amountMinor: m(450), payableMinor: m(-100) }),
      [
        ['1150', 450],
        ['5000', -450],
      ],
    ],
    [
      'clawback beyond what is owed',
      clawbackEntry({ ...payee, ...eye, amountMinor: m(450), payableMinor: m(100) }),
      [
        ['2100', 100],
        ['1150', 350],
        ['5000', -450],
      ],
    ],
    [
      'withholding',
      withholdingEntry({ ...payee, amountMinor: m(45) }),
      [
        ['2100', 45],
        ['2110', -45],
      ],
    ],
    [
      'set off',
      feeSetOffEntry({ ...payee, amountMinor: m(350) }),
      [
        ['2100', 350],
        ['1150', -350],
      ],
    ],
    [
      'fee paid',
      feePaidEntry({ ...payee, amountMinor: m(405) }),
      [
        ['2100', 405],
        ['1000', -405],
      ],
    ],
    [
      'float',
      tillFloatEntry({ ...till, from: 'petty_cash' }),
      [
        ['1010', 600],
        ['1030', -600],
      ],
    ],
    [
      'drop',
      tillDropEntry(till),
      [
        ['1020', 600],
        ['1010', -600],
      ],
    ],
    [
      'paid out',
      tillPaidOutEntry(till),
      [
        ['5150', 600],
        ['1010', -600],
      ],
    ],
    [
      'till short',
      tillDifferenceEntry({ ...about, tillId: 1, differenceMinor: m(-200) }),
      [
        ['1010', -200],
        ['5130', 200],
      ],
    ],
    [
      'till over',
      tillDifferenceEntry({ ...about, tillId: 1, differenceMinor: m(5) }),
      [
        ['1010', 5],
        ['5130', -5],
      ],
    ],
    [
      'cash banked',
      cashBankedEntry({ ...about, amountMinor: m(600) }),
      [
        ['1000', 600],
        ['1020', -600],
      ],
    ],
  ];
  test.each(rows)('%s', (_, entry, expected) => {
    expect(moves(entry)).toEqual(expected);
    expect(checkEntry(entry)).toEqual([]);
  });
});

describe('receiptEntry', () => {
  test('two tills in one receipt · change · comes from the first', () => {
    const entry = receiptEntry(
      receipt({
        tenders: [
          { tender: 'cash', amountMinor: m(50), tillId: 1 },
          { tender: 'cash', amountMinor: m(20), tillId: 2 },
        ],
        changeMinor: m(5),
        appliedMinor: m(65),
      }),
    );
    expect(entry.lines.map(({ tillId, amountMinor }) => [tillId, amountMinor])).toEqual([
      [1, 45],
      [2, 20],
      [undefined, -65],
    ]);
  });
  test('any receipt that adds up · any tenders, change, rounding and debt · balances and clears the debt first', () => {
    const tender = fc.record({
      tender: fc.constantFrom(...TENDERS),
      amountMinor: fc.integer({ min: 1, max: 1e7 }).map(m),
      tillId: fc.integer({ min: 1, max: 2 }),
    });
    fc.assert(
      fc.property(
        fc.array(tender, { minLength: 1, maxLength: 5 }),
        fc.nat({ max: 1_000 }),
        fc.integer({ min: -4, max: 4 }),
        fc.nat({ max: 1e6 }),
        fc.nat({ max: 1e6 }),
        (tenders, change, rounding, credit, receivable) => {
          const taken = tenders.reduce((total, each) => total + each.amountMinor, 0);
          const cash = tenders.filter((each) => each.tender === 'cash');
          const changeMinor = cash.length > 0 ? change : 0;
          const total = taken - changeMinor + rounding;
          fc.pre(total > 0);
          const creditMinor = Math.min(credit, total);
          const entry = receiptEntry(
            receipt({
              tenders,
              changeMinor: m(changeMinor),
              roundingMinor: m(rounding),
              appliedMinor: m(total - creditMinor),
              creditMinor: m(creditMinor),
              receivableMinor: m(receivable),
            }),
          );
          expect(checkEntry(entry).filter(({ code }) => code !== 'too_few_lines')).toEqual([]);
          expect(balanceOf(entry, '1130')).toBe(m(-Math.min(receivable, total - creditMinor)));
        },
      ),
      { numRuns: CASES },
    );
  });
});

describe('checkEntry', () => {
  const sound = payoutEntry({ ...about, amountMinor: m(10) });
  const codes = (entry: EntryDraft) => checkEntry(entry).map(({ code }) => code);
  test('every flaw · of an entry · is refused by name', () => {
    expect(codes(sound)).toEqual([]);
    expect(codes({ ...sound, lines: sound.lines.slice(0, 1) })).toEqual(['too_few_lines', 'unbalanced']);
    expect(codes({ ...sound, lines: [] })).toEqual(['too_few_lines']);
    expect(codes({ ...sound, lines: [...sound.lines, { account: '1000', amountMinor: m(0) }] })).toEqual([
      'zero_line',
    ]);
    expect(codes({ ...sound, lines: sound.lines.map((line) => ({ ...line, account: '9999' })) })).toEqual([
      'unknown_account',
      'unknown_account',
    ]);
    expect(
      codes({ ...sound, lines: [{ account: '1000', amountMinor: 0.5 as never }, ...sound.lines] }),
    ).toEqual(['not_whole_units']);
    expect(codes({ ...sound, lines: [{ account: '1000', amountMinor: m(1) }, ...sound.lines] })).toEqual([
      'unbalanced',
    ]);
  });
  test.each([
    ['1010', ['till']],
    ['2000', ['course']],
    ['2100', ['payee']],
    ['4010', ['course', 'eye', 'obligation']],
    ['5130', ['till']],
  ])('%s · without what it must name · is refused naming it', (account, dimensions) => {
    const findings = checkEntry({
      ...sound,
      lines: [
        { account, amountMinor: m(1) },
        { account: '1000', amountMinor: m(-1) },
      ],
    });
    expect(findings.map(({ code, line }) => [code, line])).toEqual(
      dimensions.map(() => ['missing_dimension', 0]),
    );
    dimensions.forEach((dimension, index) => {
      expect(findings[index]?.words).toContain(dimension);
    });
  });
  test('any balanced entry · with one unit more on one line · is refused', () => {
    fc.assert(
      fc.property(anyEntry(), fc.nat(), (entry, at) => {
        expect(codes(entry)).toEqual([]);
        const index = at % entry.lines.length;
        const lines = entry.lines.map((line, i) =>
          i === index ? { ...line, amountMinor: m(line.amountMinor + 1) } : line,
        );
        expect(codes({ ...entry, lines })).toContain('unbalanced');
      }),
      { numRuns: CASES },
    );
  });
});

describe('reverseEntry and trialBalance', () => {
  const mended = { occurredOn: clinicDate('2026-03-13'), memo: 'Wrong tender' };
  test('any entry and its reversal · together · leave nothing', () => {
    fc.assert(
      fc.property(anyEntry(), (entry) => {
        const back = reverseEntry({ ...entry, kind: 'receipt' }, mended);
        expect(back.kind).toBe('receipt_reversed');
        expect(checkEntry(back)).toEqual([]);
        expect(trialBalance([entry, back]).every(({ balanceMinor }) => balanceMinor === 0)).toBe(true);
      }),
      { numRuns: CASES },
    );
  });
  test('any journal · of balanced entries · has a trial balance of zero, each account once and in order', () => {
    fc.assert(
      fc.property(fc.array(anyEntry(), { maxLength: 10 }), (entries) => {
        const rows = trialBalance(entries);
        expect(rows.reduce((total, row) => total + row.balanceMinor, 0)).toBe(0);
        const accounts = rows.map(({ account }) => account);
        expect(accounts).toEqual([...new Set(accounts)].sort());
      }),
      { numRuns: CASES },
    );
  });
  test('two currencies · of one account · stand apart', () => {
    const other = { ...payoutEntry({ ...about, amountMinor: m(7) }), currency: 'GBP' as typeof EUR };
    expect(trialBalance([payoutEntry({ ...about, amountMinor: m(10) }), other])).toEqual([
      { account: '1000', currency: 'EUR', balanceMinor: 10 },
      { account: '1000', currency: 'GBP', balanceMinor: 7 },
      { account: '1100', currency: 'EUR', balanceMinor: -10 },
      { account: '1100', currency: 'GBP', balanceMinor: -7 },
    ]);
  });
});
