export { type AccountTotal, accountTotals, courseBalance, tillBalance } from './balances.ts';
export { ledgerRoutes } from './ledger-routes.ts';
export { type SeriesKind, takeNumber } from './number-series.ts';
export {
  type EntrySource,
  entryOf,
  type PostEntryInput,
  type PostedEntry,
  postEntry,
  readEntry,
} from './post-entry.ts';
