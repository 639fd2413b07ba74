/** What an account is, which decides its place in statements and its name in exports. */
export type AccountKind = 'asset' | 'liability' | 'equity' | 'income' | 'expense';

/** What a line on the account must name besides its amount. */
export type Dimension = 'course' | 'till' | 'payee';

export interface Account {
  readonly code: string;
  readonly name: string;
  readonly kind: AccountKind;
  readonly needs: readonly Dimension[];
}

function account(code: string, name: string, kind: AccountKind, ...needs: Dimension[]): Account {
  return { code, name, kind, needs };
}

/** The default chart of accounts; numbers are the clinic's to choose, these are the house's. */
export const CHART: readonly Account[] = [
  account('1000', 'Bank', 'asset'),
  account('1010', 'Till', 'asset', 'till'),
  account('1015', 'Cheques in hand', 'asset'),
  account('1020', 'Cash in transit', 'asset'),
  account('1025', 'Transfers awaited', 'asset'),
  account('1030', 'Petty cash', 'asset'),
  account('1100', 'Online clearing', 'asset'),
  account('1110', 'Terminal clearing', 'asset'),
  account('1120', 'Lender', 'asset'),
  account('1130', 'Patient receivable', 'asset', 'course'),
  account('1140', 'Disputes', 'asset'),
  account('1150', 'Surgeon receivable', 'asset', 'payee'),
  account('2000', 'Contract liability', 'liability', 'course'),
  account('2010', 'Refunds payable', 'liability', 'course'),
  account('2020', 'Unapplied credit', 'liability', 'course'),
  account('2100', 'Surgeon fees', 'liability', 'payee'),
  account('2110', 'Withholding', 'liability', 'payee'),
  account('2200', 'Output tax', 'liability'),
  account('3000', 'Opening balances', 'equity'),
  account('4000', 'Assessment', 'income'),
  account('4010', 'Surgery', 'income'),
  account('4020', 'Aftercare', 'income'),
  account('4030', 'Enhancement', 'income'),
  account('4040', 'Expired options', 'income'),
  account('4050', 'Cancellation', 'income'),
  account('4060', 'Goods', 'income'),
  account('4070', 'Instalment charges', 'income'),
  account('5000', 'Surgeon fees', 'expense', 'payee'),
  account('5010', 'Licence and consumables', 'expense'),
  account('5100', 'Card fees', 'expense'),
  account('5110', 'Lender discount', 'expense'),
  account('5120', 'Dispute fees', 'expense'),
  account('5130', 'Over and short', 'expense'),
  account('5135', 'Cash rounding', 'expense'),
  account('5140', 'Impairment', 'expense'),
  account('5150', 'Small expenses paid from the till', 'expense'),
];

const BY_CODE: ReadonlyMap<string, Account> = new Map(CHART.map((entry) => [entry.code, entry]));

/** The account with a code, undefined when the chart has none. */
export function accountOf(code: string): Account | undefined {
  return BY_CODE.get(code);
}
