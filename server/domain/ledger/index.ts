export * from './chart.ts';
export * from './course-control.ts';
export * from './entries-of-courses.ts';
export * from './entries-of-fees.ts';
export {
  type BookedTender,
  bankedEntry,
  lenderSettlementEntry,
  payoutEntry,
  processorFeeEntry,
  type ReceiptToBook,
  receiptEntry,
  TENDER_ACCOUNT,
  terminalSettlementEntry,
} from './entries-of-receipts.ts';
export * from './entries-of-tills.ts';
export {
  type AccountBalance,
  checkEntry,
  type EntryDraft,
  type EntryFinding,
  type EntryHeader,
  type EntryKind,
  type EntryLine,
  type HappeningKind,
  reverseEntry,
  trialBalance,
} from './entry.ts';
export * from './journal-text.ts';
