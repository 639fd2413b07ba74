/** How money was handed over. */
export type Tender =
  | 'cash'
  | 'card_machine'
  | 'online_card'
  | 'bank_transfer'
  | 'cheque'
  | 'lender'
  | 'credit';

export const TENDERS: readonly Tender[] = [
  'cash',
  'card_machine',
  'online_card',
  'bank_transfer',
  'cheque',
  'lender',
  'credit',
];

/** Tender names as screens and receipts write them. */
export const TENDER_WORDS: Readonly<Record<Tender, string>> = {
  cash: 'Cash',
  card_machine: 'Card machine',
  online_card: 'Online card',
  bank_transfer: 'Bank transfer',
  cheque: 'Cheque',
  lender: 'Lender',
  credit: 'Credit on account',
};

/** The account each tender lands on until the bank shows it. Cash names its till, credit its course. */
export const TENDER_ACCOUNT: Readonly<Record<Tender, string>> = {
  cash: '1010',
  card_machine: '1110',
  online_card: '1100',
  bank_transfer: '1025',
  cheque: '1015',
  lender: '1120',
  credit: '2020',
};
