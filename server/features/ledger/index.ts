export { type AccountTotal, accountTotals, courseBalance, tillBalance } from './balances.ts';
export { type SeriesKind, takeNumber } from './number-series.ts';
export { type EntrySource, entryOf, type PostEntryInput, type PostedEntry, postEntry } from './post-entry.ts';
