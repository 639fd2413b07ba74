import { z } from 'zod';
import { courseDueSchema, eyeState, moneyState } from './courses.ts';
import { defineContract } from './define.ts';
import {
  amountField,
  attemptField,
  currencyField,
  dayField,
  eyeField,
  idField,
  instantField,
  lateralityField,
  lineField,
} from './fields.ts';
import { checkoutSchema } from './payments.ts';

const PATIENT = { kind: 'patient' } as const;

/** One option as the patient reads it: prices, words and dates; nothing of what things cost the clinic. */
export const patientOptionSchema = z
  .object({
    optionNo: z.int().min(1),
    label: z.string(),
    standing: z.enum(['quotable', 'estimate']),
    surgeryOn: z.array(z.object({ eye: eyeField, on: dayField.nullable() })),
    totalMinor: amountField,
    taxMinor: amountField,
    taxWords: z.string(),
    eyes: z.array(z.object({ eye: eyeField, procedure: z.string(), shareMinor: amountField })),
    lines: z.array(
      z.object({
        label: z.string(),
        detail: z.string().nullable(),
        laterality: lateralityField,
        amountMinor: z.int(),
      }),
    ),
    included: z.array(z.string()),
    notIncluded: z.array(z.string()),
    schedule: z.array(
      z.object({
        label: z.string(),
        detail: z.string(),
        dueOn: dayField.nullable(),
        amountMinor: amountField,
        from: z.enum(['patient', 'lender']),
      }),
    ),
    depositMinor: amountField,
    cancellation: z.array(
      z.object({
        event: z.string(),
        until: dayField.nullable(),
        label: z.string(),
        detail: z.string(),
        keptMinor: amountField,
        comesBackMinor: amountField.nullable(),
      }),
    ),
    cover: z.array(
      z.object({
        eye: eyeField,
        label: z.string(),
        months: z.int(),
        from: dayField.nullable(),
        until: dayField.nullable(),
        conditions: z.array(z.string()),
        priceOutOfCoverMinor: amountField,
      }),
    ),
    warnings: z.array(z.string()),
  })
  .meta({ id: 'PatientOption' });

export const patientQuoteSchema = z
  .object({
    clinicName: z.string(),
    siteName: z.string(),
    siteAddress: z.string(),
    quoteNumber: z.string(),
    quoteVersionId: idField,
    versionNo: z.int(),
    state: z.enum(['issued', 'accepted', 'lapsed', 'withdrawn', 'superseded']),
    patientName: z.string(),
    givenName: z.string(),
    /** null on an estimate: no surgeon has approved a plan. */
    surgeonName: z.string().nullable(),
    currency: currencyField,
    issuedOn: dayField,
    validUntil: dayField,
    options: z.array(patientOptionSchema),
    accepted: z.object({ optionNo: z.int(), typedName: z.string(), acceptedOn: dayField }).nullable(),
    course: z
      .object({
        number: z.string(),
        totalMinor: amountField,
        paidMinor: amountField,
        dueNowMinor: amountField,
        leftMinor: amountField,
        eyes: z.array(
          z.object({
            eye: eyeField,
            procedure: z.string(),
            state: eyeState,
            money: moneyState,
            plannedOn: dayField.nullable(),
            doneOn: dayField.nullable(),
          }),
        ),
        dues: z.array(courseDueSchema),
        receipts: z.array(
          z.object({
            receiptId: idField,
            number: z.string(),
            occurredOn: dayField,
            totalMinor: amountField,
            voided: z.boolean(),
          }),
        ),
        checkout: checkoutSchema.nullable(),
      })
      .nullable(),
  })
  .meta({ id: 'PatientQuote' });

export type PatientQuote = z.output<typeof patientQuoteSchema>;

export const openLink = defineContract({
  id: 'openLink',
  summary: 'Exchange the secret of a patient’s link for a cookie',
  method: 'post',
  path: '/api/portal/open',
  access: { kind: 'public' },
  body: z.strictObject({ token: z.string().min(20).max(100) }),
  response: z.object({ opened: z.literal(true), expiresAt: instantField }),
  problems: ['not_found', 'gone', 'too_many_requests'],
});

export const getMyQuote = defineContract({
  id: 'getMyQuote',
  summary: 'The patient’s own quote, and the course once it is accepted',
  method: 'get',
  path: '/api/portal/quote',
  access: PATIENT,
  response: patientQuoteSchema,
  problems: ['gone'],
});

export const acceptMyQuote = defineContract({
  id: 'acceptMyQuote',
  summary: 'Accept one option by typing one’s name',
  method: 'post',
  path: '/api/portal/accept',
  access: PATIENT,
  body: z.strictObject({
    quoteVersionId: idField,
    optionNo: z.int().min(1).max(3),
    typedName: lineField(160),
    /** The statements the patient ticked, as they were worded. */
    ticks: z.array(lineField(300)).min(1, 'please tick each statement').max(10),
  }),
  response: patientQuoteSchema,
  problems: ['refused', 'conflict', 'gone'],
});

export const startMyCheckout = defineContract({
  id: 'startMyCheckout',
  summary:
    'Open the hosted card page for what is due; repeating with the same attemptKey leads to the same page',
  method: 'post',
  path: '/api/portal/checkouts',
  access: PATIENT,
  body: z.strictObject({ attemptKey: attemptField, purpose: z.enum(['deposit', 'balance']) }),
  response: checkoutSchema,
  status: 201,
  problems: ['refused', 'conflict', 'unavailable', 'gone'],
});

export const getMyCheckout = defineContract({
  id: 'getMyCheckout',
  summary: 'How a payment stands, asked of the processor anew while it is open',
  method: 'get',
  path: '/api/portal/checkouts/:attemptKey',
  access: PATIENT,
  params: z.object({ attemptKey: attemptField }),
  response: checkoutSchema,
});

export const getMyReceipt = defineContract({
  id: 'getMyReceipt',
  summary: 'A receipt of one’s own as PDF',
  method: 'get',
  path: '/api/portal/receipts/:receiptId/pdf',
  access: PATIENT,
  params: z.object({ receiptId: idField }),
  response: z.unknown(),
  produces: 'application/pdf',
});

export const getMyQuotePdf = defineContract({
  id: 'getMyQuotePdf',
  summary: 'One’s quote as PDF',
  method: 'get',
  path: '/api/portal/quote/pdf',
  access: PATIENT,
  response: z.unknown(),
  produces: 'application/pdf',
});
