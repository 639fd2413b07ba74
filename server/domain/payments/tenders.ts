/** How money was handed over, in the order receipts and screens list it. */
export const TENDERS = [
  'cash',
  'card_machine',
  'online_card',
  'bank_transfer',
  'cheque',
  'lender',
  'credit',
] as const;

export type Tender = (typeof TENDERS)[number];

/** Tenders as screens and receipts write them. */
export const TENDER_LABEL: Readonly<Record<Tender, string>> = {
  cash: 'Cash',
  card_machine: 'Card machine',
  online_card: 'Online card',
  bank_transfer: 'Bank transfer',
  cheque: 'Cheque',
  lender: 'Lender',
  credit: 'Credit on account',
};
