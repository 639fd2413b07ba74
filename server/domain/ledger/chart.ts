/** What an account is; assets and expenses grow by debits, the others by credits. */
export type AccountKind = 'asset' | 'liability' | 'equity' | 'income' | 'expense';

/** What a line on an account must name, so that its balance can be told apart by it. */
export type Dimension = 'course' | 'till' | 'payee' | 'eye' | 'obligation';

export interface Account {
  readonly code: string;
  readonly name: string;
  readonly kind: AccountKind;
  readonly needs: readonly Dimension[];
}

/** The default numbers by name, so that rules read as words. */
export const ACCOUNT = {
  bank: '1000',
  till: '1010',
  chequesInHand: '1015',
  cashInTransit: '1020',
  transfersAwaited: '1025',
  pettyCash: '1030',
  onlineClearing: '1100',
  terminalClearing: '1110',
  lender: '1120',
  patientReceivable: '1130',
  disputes: '1140',
  surgeonReceivable: '1150',
  contractLiability: '2000',
  refundsPayable: '2010',
  unappliedCredit: '2020',
  surgeonFeesPayable: '2100',
  withholding: '2110',
  outputTax: '2200',
  openingBalances: '3000',
  assessmentIncome: '4000',
  surgeryIncome: '4010',
  aftercareIncome: '4020',
  enhancementIncome: '4030',
  expiredOptions: '4040',
  cancellationIncome: '4050',
  goodsIncome: '4060',
  instalmentCharges: '4070',
  surgeonFees: '5000',
  licenceAndConsumables: '5010',
  cardFees: '5100',
  lenderDiscount: '5110',
  disputeFees: '5120',
  overAndShort: '5130',
  cashRounding: '5135',
  impairment: '5140',
  smallExpenses: '5150',
} as const;

function account(code: string, name: string, kind: AccountKind, ...needs: Dimension[]): Account {
  return { code, name, kind, needs };
}

/** The chart of accounts, in order of number. */
export const CHART: readonly Account[] = [
  account(ACCOUNT.bank, 'Bank', 'asset'),
  account(ACCOUNT.till, 'Till', 'asset', 'till'),
  account(ACCOUNT.chequesInHand, 'Cheques in hand', 'asset'),
  account(ACCOUNT.cashInTransit, 'Cash in transit', 'asset'),
  account(ACCOUNT.transfersAwaited, 'Transfers awaited', 'asset'),
  account(ACCOUNT.pettyCash, 'Petty cash', 'asset'),
  account(ACCOUNT.onlineClearing, 'Online clearing', 'asset'),
  account(ACCOUNT.terminalClearing, 'Terminal clearing', 'asset'),
  account(ACCOUNT.lender, 'Lender', 'asset'),
  account(ACCOUNT.patientReceivable, 'Patient receivable', 'asset', 'course'),
  account(ACCOUNT.disputes, 'Disputes', 'asset'),
  account(ACCOUNT.surgeonReceivable, 'Surgeon receivable', 'asset', 'payee'),
  account(ACCOUNT.contractLiability, 'Contract liability', 'liability', 'course'),
  account(ACCOUNT.refundsPayable, 'Refunds payable', 'liability'),
  account(ACCOUNT.unappliedCredit, 'Unapplied credit', 'liability'),
  account(ACCOUNT.surgeonFeesPayable, 'Surgeon fees payable', 'liability', 'payee'),
  account(ACCOUNT.withholding, 'Withholding', 'liability', 'payee'),
  account(ACCOUNT.outputTax, 'Output tax', 'liability'),
  account(ACCOUNT.openingBalances, 'Opening balances', 'equity'),
  account(ACCOUNT.assessmentIncome, 'Assessment', 'income', 'course', 'obligation'),
  account(ACCOUNT.surgeryIncome, 'Surgery', 'income', 'course', 'eye', 'obligation'),
  account(ACCOUNT.aftercareIncome, 'Aftercare', 'income', 'course', 'obligation'),
  account(ACCOUNT.enhancementIncome, 'Enhancement', 'income', 'course', 'eye', 'obligation'),
  account(ACCOUNT.expiredOptions, 'Expired options', 'income', 'course', 'obligation'),
  account(ACCOUNT.cancellationIncome, 'Cancellation', 'income', 'course'),
  account(ACCOUNT.goodsIncome, 'Goods', 'income'),
  account(ACCOUNT.instalmentCharges, 'Instalment charges', 'income', 'course'),
  account(ACCOUNT.surgeonFees, 'Surgeon fees', 'expense', 'payee'),
  account(ACCOUNT.licenceAndConsumables, 'Licence and consumables', 'expense'),
  account(ACCOUNT.cardFees, 'Card fees', 'expense'),
  account(ACCOUNT.lenderDiscount, 'Lender discount', 'expense'),
  account(ACCOUNT.disputeFees, 'Dispute fees', 'expense'),
  account(ACCOUNT.overAndShort, 'Over and short', 'expense', 'till'),
  account(ACCOUNT.cashRounding, 'Cash rounding', 'expense'),
  account(ACCOUNT.impairment, 'Impairment', 'expense', 'course'),
  account(ACCOUNT.smallExpenses, 'Small expenses from the till', 'expense'),
];

const BY_CODE: ReadonlyMap<string, Account> = new Map(CHART.map((each) => [each.code, each]));

/** The account with a number; undefined when the chart has none. */
export function accountOf(code: string): Account | undefined {
  return BY_CODE.get(code);
}
