import { z } from 'zod';
import { defineContract, staff } from './define.ts';
import { currencyField, dayField, idField, instantField } from './fields.ts';
import { costBookSchema, priceBookSchema } from './pricing.ts';

const READERS = staff('counsellor', 'front_desk', 'surgeon', 'manager', 'auditor');
const MANAGER = staff('manager');
const bookParams = z.object({ priceBookId: idField });

/** draft: nobody is quoted from it · waiting: in force from a day to come · in_force · superseded by a later one. */
export const bookStanding = z.enum(['draft', 'waiting', 'in_force', 'superseded']);

export const bookSummarySchema = z
  .object({
    priceBookId: idField,
    versionNo: z.int(),
    standing: bookStanding,
    /** null: for every site of the clinic. */
    siteId: idField.nullable(),
    currency: currencyField,
    inForceOn: dayField.nullable(),
    createdBy: z.string(),
    createdAt: instantField,
    contentHash: z.string(),
  })
  .meta({ id: 'PriceBookSummary' });

export const bookFindingSchema = z
  .object({
    severity: z.enum(['error', 'notice']),
    code: z.string(),
    field: z.string(),
    ruleId: z.string().nullable(),
    words: z.string(),
    change: z.string(),
  })
  .meta({ id: 'BookFinding' });

export const bookChangeSchema = z
  .object({
    change: z.enum(['added', 'removed', 'changed']),
    section: z.string(),
    ruleId: z.string().nullable(),
    label: z.string(),
    /** JSON values before and after; a member that is not there is left out. */
    fields: z.array(
      z.object({ path: z.string(), before: z.unknown().optional(), after: z.unknown().optional() }),
    ),
  })
  .meta({ id: 'BookChange' });

export const priceBookViewSchema = bookSummarySchema
  .extend({
    book: priceBookSchema,
    /** What the rules cost the clinic: managers and auditors only, null for everybody else. */
    costs: costBookSchema.nullable(),
    findings: z.array(bookFindingSchema),
  })
  .meta({ id: 'PriceBookView' });

export type PriceBookView = z.output<typeof priceBookViewSchema>;
export type BookSummary = z.output<typeof bookSummarySchema>;
export type BookChangeView = z.output<typeof bookChangeSchema>;
export type BookFindingView = z.output<typeof bookFindingSchema>;

export const listPriceBooks = defineContract({
  id: 'listPriceBooks',
  summary: 'Every version of the clinic’s price book, newest first',
  method: 'get',
  path: '/api/price-books',
  access: READERS,
  response: z.object({ books: z.array(bookSummarySchema) }),
});

export const getPriceBook = defineContract({
  id: 'getPriceBook',
  summary: 'One version of the price book with what is wrong with it',
  method: 'get',
  path: '/api/price-books/:priceBookId',
  access: READERS,
  params: bookParams,
  response: priceBookViewSchema,
});

export const getPricingBook = defineContract({
  id: 'getPricingBook',
  summary: 'The book a site quotes from on a day, for the engine in the browser: no costs',
  method: 'get',
  path: '/api/sites/:siteId/price-book',
  access: READERS,
  params: z.object({ siteId: idField }),
  query: z.object({ day: dayField.optional() }),
  response: z.object({ priceBookId: idField, versionNo: z.int(), book: priceBookSchema }),
});

export const createPriceBook = defineContract({
  id: 'createPriceBook',
  summary: 'Begin a draft: from the book in force, or from a file',
  method: 'post',
  path: '/api/price-books',
  access: MANAGER,
  body: z.discriminatedUnion('from', [
    z.strictObject({ from: z.literal('in_force'), siteId: idField.nullable() }),
    z.strictObject({
      from: z.literal('file'),
      siteId: idField.nullable(),
      book: priceBookSchema,
      costs: costBookSchema.optional(),
    }),
  ]),
  response: priceBookViewSchema,
  status: 201,
  problems: ['refused', 'not_found'],
});

export const savePriceBook = defineContract({
  id: 'savePriceBook',
  summary:
    'Replace a draft; refused when somebody else changed it meanwhile, or when it is no draft any more',
  method: 'put',
  path: '/api/price-books/:priceBookId',
  access: MANAGER,
  params: bookParams,
  body: z.strictObject({
    /** Of the draft that was read: what has changed meanwhile is not written over. */
    contentHash: z.string().length(64),
    book: priceBookSchema,
    costs: costBookSchema,
  }),
  response: priceBookViewSchema,
  problems: ['conflict', 'refused'],
});

export const putPriceBookInForce = defineContract({
  id: 'putPriceBookInForce',
  summary: 'Put a draft without errors in force from today or a later day; it never changes again',
  method: 'post',
  path: '/api/price-books/:priceBookId/in-force',
  access: MANAGER,
  params: bookParams,
  body: z.strictObject({ contentHash: z.string().length(64), inForceOn: dayField }),
  response: priceBookViewSchema,
  problems: ['conflict', 'refused'],
});

export const comparePriceBooks = defineContract({
  id: 'comparePriceBooks',
  summary: 'A version against the book in force, or against another version, rule by rule',
  method: 'get',
  path: '/api/price-books/:priceBookId/changes',
  access: READERS,
  params: bookParams,
  query: z.object({ against: idField.optional() }),
  response: z.object({
    against: bookSummarySchema,
    changes: z.array(bookChangeSchema),
  }),
});
