import { z } from 'zod';
import type { QuoteDraft } from '#domain/quotes/index';
import { pairEyeSchema } from './courses.ts';
import { defineContract, staff } from './define.ts';
import {
  amountField,
  currencyField,
  dayField,
  idField,
  instantField,
  lateralityField,
  lineField,
  reasonField,
} from './fields.ts';
import { approvedPlanSchema } from './patients.ts';
import { pricedCourseSchema, refusalSchema } from './priced.ts';
import { courseInputSchema } from './pricing.ts';

const READERS = staff('counsellor', 'front_desk', 'manager', 'auditor');
const WRITERS = staff('counsellor', 'manager');
const quoteParams = z.object({ quoteId: idField });

export const quoteState = z.enum(['draft', 'issued', 'accepted', 'lapsed', 'withdrawn']);

const typed = z.string().max(20);
const ruleId = z.string().min(1).max(64);
const prescriptionTyped = z.strictObject({ sphere: typed, cylinder: typed, axis: typed, vertex: typed });
const perEye = z.strictObject({ OD: ruleId.nullable(), OS: ruleId.nullable() });

const optionDraftSchema = z.strictObject({
  label: z.string().trim().max(80),
  procedures: perEye,
  covers: perEye,
  surgery: z.discriminatedUnion('plan', [
    z.strictObject({ plan: z.literal('same_session'), on: dayField.nullable() }),
    z.strictObject({
      plan: z.literal('staged'),
      on: z.strictObject({ OD: dayField.nullable(), OS: dayField.nullable() }),
    }),
  ]),
  priceListId: ruleId.nullable(),
  packageId: ruleId.nullable(),
  addOns: z.array(z.strictObject({ addOnId: ruleId, laterality: lateralityField })).max(50),
  discounts: z.array(z.strictObject({ discountId: ruleId, size: z.string().max(30) })).max(20),
  paymentPlanId: ruleId.nullable(),
});

/** A quote while it is being written: as typed, one to three options. */
export const quoteDraftSchema = z
  .strictObject({
    prescriptions: z.strictObject({ OD: prescriptionTyped, OS: prescriptionTyped }),
    options: z.array(optionDraftSchema).min(1, 'needs one option').max(3, 'holds at most three options'),
  })
  .meta({ id: 'QuoteDraft' }) satisfies z.ZodType<QuoteDraft>;

/** What the server makes of one option of a draft: the price with its hash, or what to change. */
export const optionPriceSchema = z
  .discriminatedUnion('ok', [
    z.object({
      ok: z.literal(true),
      totalMinor: amountField,
      contentHash: z.string(),
      standing: z.enum(['quotable', 'estimate']),
      /** Version of the price book it was priced from. */
      bookVersion: z.int(),
    }),
    z.object({ ok: z.literal(false), refusals: z.array(refusalSchema) }),
  ])
  .meta({ id: 'OptionPrice' });

export const quoteVersionSchema = z
  .object({
    quoteVersionId: idField,
    versionNo: z.int(),
    priceBookVersion: z.int(),
    issuedOn: dayField,
    issuedAt: instantField,
    issuedBy: z.string(),
    validUntil: dayField,
    contentHash: z.string(),
    surgeonName: z.string().nullable(),
    options: z.array(
      z.object({
        label: z.string(),
        input: courseInputSchema,
        priced: pricedCourseSchema,
        contentHash: z.string(),
      }),
    ),
  })
  .meta({ id: 'QuoteVersion' });

export const quoteLinkSchema = z
  .object({
    quoteLinkId: idField,
    versionNo: z.int(),
    sentTo: z.string().nullable(),
    createdAt: instantField,
    expiresAt: instantField,
    revokedAt: instantField.nullable(),
    firstOpenedAt: instantField.nullable(),
    lastOpenedAt: instantField.nullable(),
    works: z.boolean(),
  })
  .meta({ id: 'QuoteLink' });

export const quoteSchema = z
  .object({
    quoteId: idField,
    number: z.string(),
    siteId: idField,
    state: quoteState,
    today: dayField,
    counsellor: z.string(),
    createdAt: instantField,
    changedAt: instantField,
    nextContactOn: dayField.nullable(),
    withdrawnReason: z.string().nullable(),
    patient: z.object({
      patientId: idField,
      givenName: z.string(),
      familyName: z.string(),
      bornOn: dayField,
      email: z.string().nullable(),
    }),
    /** The newest plan, good or not; null while no surgeon has approved one. */
    plan: approvedPlanSchema.nullable(),
    /** null once accepted or withdrawn. */
    draft: quoteDraftSchema.nullable(),
    draftVersion: z.int(),
    /** The draft as the server prices it today; empty without a draft. */
    prices: z.array(optionPriceSchema),
    /** True when the draft would say something else than the newest version. */
    draftDiffers: z.boolean(),
    /** Newest first. */
    versions: z.array(quoteVersionSchema),
    links: z.array(quoteLinkSchema),
    acceptance: z
      .object({
        versionNo: z.int(),
        optionNo: z.int(),
        channel: z.enum(['link', 'desk']),
        typedName: z.string(),
        ticks: z.array(z.string()),
        acceptedOn: dayField,
        acceptedAt: instantField,
        recordedBy: z.string().nullable(),
      })
      .nullable(),
    courseId: idField.nullable(),
    /** The last time a discount over the limit was put to a second person. */
    approval: z
      .object({
        state: z.enum(['asked', 'approved', 'refused', 'withdrawn']),
        requestedBy: z.string(),
        decidedBy: z.string().nullable(),
        decisionNote: z.string().nullable(),
      })
      .nullable(),
  })
  .meta({ id: 'Quote' });

export const quoteSummarySchema = z
  .object({
    quoteId: idField,
    number: z.string(),
    siteId: idField,
    state: quoteState,
    patient: z.object({ patientId: idField, name: z.string() }),
    counsellor: z.object({ userId: idField, name: z.string() }),
    changedAt: instantField,
    nextContactOn: dayField.nullable(),
    versionNo: z.int().nullable(),
    issuedOn: dayField.nullable(),
    validUntil: dayField.nullable(),
    currency: currencyField.nullable(),
    totalsMinor: z.array(amountField),
    /** Eyes of the course it became, else those of the first option, issued or drafted. */
    eyes: z.array(pairEyeSchema),
    openedAt: instantField.nullable(),
  })
  .meta({ id: 'QuoteSummary' });

export type QuoteView = z.output<typeof quoteSchema>;
export type QuoteVersionView = z.output<typeof quoteVersionSchema>;
export type QuoteSummary = z.output<typeof quoteSummarySchema>;
export type QuoteLinkView = z.output<typeof quoteLinkSchema>;
export type OptionPrice = z.output<typeof optionPriceSchema>;

export const listQuotes = defineContract({
  id: 'listQuotes',
  summary: 'Quotes of one’s sites, newest first',
  method: 'get',
  path: '/api/quotes',
  access: READERS,
  query: z.object({
    state: quoteState.optional(),
    counsellor: idField.optional(),
    patient: idField.optional(),
    siteId: idField.optional(),
    q: z.string().trim().max(120).optional(),
    /** Only those whose next contact is on this day or before. */
    contactBy: dayField.optional(),
  }),
  response: z.object({
    quotes: z.array(quoteSummarySchema),
    more: z.boolean(),
    counsellors: z.array(z.object({ userId: idField, name: z.string() })),
  }),
});

export const getQuote = defineContract({
  id: 'getQuote',
  summary: 'A quote: draft, issued versions, links, acceptance',
  method: 'get',
  path: '/api/quotes/:quoteId',
  access: READERS,
  params: quoteParams,
  response: quoteSchema,
});

export const createQuote = defineContract({
  id: 'createQuote',
  summary: 'Begin a quote for a patient from what is known of the eyes',
  method: 'post',
  path: '/api/quotes',
  access: WRITERS,
  body: z.strictObject({ patientId: idField }),
  response: quoteSchema,
  status: 201,
  problems: ['refused'],
});

export const saveDraft = defineContract({
  id: 'saveDraft',
  summary: 'Save a draft as typed; refused when somebody else saved it meanwhile',
  method: 'put',
  path: '/api/quotes/:quoteId/draft',
  access: WRITERS,
  params: quoteParams,
  body: z.strictObject({ draft: quoteDraftSchema, draftVersion: z.int().min(1) }),
  response: z.object({
    draftVersion: z.int(),
    savedAt: instantField,
    prices: z.array(optionPriceSchema),
  }),
  problems: ['conflict', 'refused'],
});

export const priceDraft = defineContract({
  id: 'priceDraft',
  summary: 'What the server’s engine makes of a draft for this quote’s patient; nothing is stored',
  method: 'post',
  path: '/api/quotes/:quoteId/prices',
  access: WRITERS,
  params: quoteParams,
  body: z.strictObject({ draft: quoteDraftSchema }),
  response: z.object({
    options: z.array(
      z.discriminatedUnion('ok', [
        z.object({ ok: z.literal(true), contentHash: z.string(), priced: pricedCourseSchema }),
        z.object({ ok: z.literal(false), refusals: z.array(refusalSchema) }),
      ]),
    ),
  }),
});

export const issueQuote = defineContract({
  id: 'issueQuote',
  summary:
    'Freeze the saved draft as the next version and send the patient a link; refused when a total or hash is not what the server works out',
  method: 'post',
  path: '/api/quotes/:quoteId/versions',
  access: WRITERS,
  params: quoteParams,
  body: z.strictObject({
    draftVersion: z.int().min(1),
    /** What the person saw, option by option. */
    options: z
      .array(z.strictObject({ totalMinor: amountField, contentHash: z.string().length(64) }))
      .min(1)
      .max(3),
    /** Send no mail: the patient has no address, or takes the paper home. */
    withoutMail: z.boolean().default(false),
  }),
  response: quoteSchema,
  status: 201,
  problems: ['conflict', 'refused'],
});

export const askDiscountApproval = defineContract({
  id: 'askDiscountApproval',
  summary: 'Ask a manager to agree to the discounts of the saved draft that are over the limit',
  method: 'post',
  path: '/api/quotes/:quoteId/approval',
  access: WRITERS,
  params: quoteParams,
  body: z.strictObject({ draftVersion: z.int().min(1), reason: reasonField }),
  response: quoteSchema,
  status: 201,
  problems: ['conflict', 'refused'],
});

export const sendQuoteAgain = defineContract({
  id: 'sendQuoteAgain',
  summary: 'Send the newest version again with a fresh link; links sent before stop working',
  method: 'post',
  path: '/api/quotes/:quoteId/links',
  access: WRITERS,
  params: quoteParams,
  body: z.strictObject({}),
  response: quoteSchema,
  status: 201,
  problems: ['refused'],
});

export const revokeQuoteLinks = defineContract({
  id: 'revokeQuoteLinks',
  summary: 'Stop every link of a quote from working',
  method: 'delete',
  path: '/api/quotes/:quoteId/links',
  access: WRITERS,
  params: quoteParams,
  response: quoteSchema,
});

export const withdrawQuote = defineContract({
  id: 'withdrawQuote',
  summary: 'Withdraw a quote that was not accepted, with a reason; its links then say so',
  method: 'post',
  path: '/api/quotes/:quoteId/withdraw',
  access: WRITERS,
  params: quoteParams,
  body: z.strictObject({ reason: reasonField }),
  response: quoteSchema,
  problems: ['conflict', 'refused'],
});

export const setNextContact = defineContract({
  id: 'setNextContact',
  summary: 'When to talk to the patient next',
  method: 'put',
  path: '/api/quotes/:quoteId/next-contact',
  access: WRITERS,
  params: quoteParams,
  body: z.strictObject({ nextContactOn: dayField.nullable() }),
  response: quoteSchema,
});

export const acceptQuoteAtDesk = defineContract({
  id: 'acceptQuoteAtDesk',
  summary: 'Record that the patient accepted one option at the desk on a signed form',
  method: 'post',
  path: '/api/quotes/:quoteId/acceptance',
  access: staff('counsellor', 'front_desk', 'manager'),
  params: quoteParams,
  body: z.strictObject({
    quoteVersionId: idField,
    optionNo: z.int().min(1).max(3),
    typedName: lineField(160),
    /** Where the signed form is kept: "paper file, signed on 12 March". */
    signedForm: lineField(300),
  }),
  response: quoteSchema,
  status: 201,
  problems: ['conflict', 'refused'],
});
