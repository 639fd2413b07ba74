import { z } from 'zod';
import { defineContract, staff } from './define.ts';
import { currencyField, dayField, eyeField, idField, instantField, minorField } from './fields.ts';

const READERS = staff('manager', 'auditor');

export const journalLineSchema = z
  .object({
    lineNo: z.int(),
    account: z.string(),
    accountName: z.string(),
    amountMinor: minorField,
    courseId: idField.nullable(),
    courseNumber: z.string().nullable(),
    eye: eyeField.nullable(),
    tillName: z.string().nullable(),
    payeeName: z.string().nullable(),
  })
  .meta({ id: 'JournalLine' });

export const journalEntrySchema = z
  .object({
    entryId: idField,
    siteId: idField,
    siteName: z.string(),
    kind: z.string(),
    sourceType: z.string(),
    sourceId: z.int(),
    occurredOn: dayField,
    bookedOn: dayField,
    recordedAt: instantField,
    currency: currencyField,
    memo: z.string(),
    by: z.string().nullable(),
    correctsEntryId: idField.nullable(),
    lines: z.array(journalLineSchema),
  })
  .meta({ id: 'JournalEntry' });

export type JournalEntryView = z.output<typeof journalEntrySchema>;

export const listEntries = defineContract({
  id: 'listEntries',
  summary: 'The journal, newest first, by day, account, course or words',
  method: 'get',
  path: '/api/journal',
  access: READERS,
  query: z.object({
    from: dayField.optional(),
    to: dayField.optional(),
    siteId: idField.optional(),
    account: z.string().max(8).optional(),
    courseId: idField.optional(),
    kind: z.string().max(40).optional(),
    words: z.string().max(80).optional(),
    /** Entries older than this one: the last of the page before. */
    before: idField.optional(),
    limit: z.coerce.number().int().min(1).max(200).default(100),
  }),
  response: z.object({ entries: z.array(journalEntrySchema), more: z.boolean() }),
});

export const trialBalanceRow = z
  .object({
    account: z.string(),
    name: z.string(),
    kind: z.enum(['asset', 'liability', 'equity', 'income', 'expense']),
    currency: currencyField,
    debitMinor: minorField,
    creditMinor: minorField,
  })
  .meta({ id: 'TrialBalanceRow' });

export const getTrialBalance = defineContract({
  id: 'getTrialBalance',
  summary: 'The trial balance of the sites one works at, as of any day',
  method: 'get',
  path: '/api/trial-balance',
  access: READERS,
  query: z.object({ asOf: dayField.optional(), siteId: idField.optional() }),
  response: z.object({
    asOf: dayField,
    rows: z.array(trialBalanceRow),
    debitMinor: minorField,
    creditMinor: minorField,
  }),
});

const exportQuery = z.object({
  from: dayField.optional(),
  to: dayField.optional(),
  siteId: idField.optional(),
});

export const exportJournalText = defineContract({
  id: 'exportJournalText',
  summary: 'The journal as plain text that hledger reads',
  method: 'get',
  path: '/api/journal.txt',
  access: READERS,
  query: exportQuery,
  response: z.unknown(),
  produces: 'text/plain',
});

export const exportJournalCsv = defineContract({
  id: 'exportJournalCsv',
  summary: 'The journal as CSV, one row a line',
  method: 'get',
  path: '/api/journal.csv',
  access: READERS,
  query: exportQuery,
  response: z.unknown(),
  produces: 'text/csv',
});
