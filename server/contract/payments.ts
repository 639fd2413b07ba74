import { z } from 'zod';
import { defineContract, staff } from './define.ts';
import {
  amountField,
  attemptField,
  currencyField,
  dayField,
  idField,
  instantField,
  lineField,
  minorField,
  positiveMinorField,
  reasonField,
} from './fields.ts';

/** How money can be handed over at the desk; online card payments come through the hosted page alone. */
export const deskTender = z.enum(['cash', 'card_machine', 'bank_transfer', 'cheque', 'lender']);
export const anyTender = z.enum([
  'cash',
  'card_machine',
  'online_card',
  'bank_transfer',
  'cheque',
  'lender',
  'credit',
]);

export const receiptSchema = z
  .object({
    receiptId: idField,
    number: z.string(),
    siteId: idField,
    courseId: idField.nullable(),
    courseNumber: z.string().nullable(),
    patientName: z.string(),
    payerName: z.string(),
    currency: currencyField,
    totalMinor: amountField,
    appliedMinor: amountField,
    creditMinor: amountField,
    changeMinor: amountField,
    roundingMinor: minorField,
    occurredOn: dayField,
    bookedOn: dayField,
    recordedAt: instantField,
    takenBy: z.string().nullable(),
    tenders: z.array(
      z.object({ tender: anyTender, amountMinor: amountField, reference: z.string().nullable() }),
    ),
    voided: z.object({ reason: z.string(), by: z.string(), at: instantField }).nullable(),
  })
  .meta({ id: 'Receipt' });

export type ReceiptView = z.output<typeof receiptSchema>;

export const takePayment = defineContract({
  id: 'takePayment',
  summary:
    'Take a payment at the desk, split over tenders; repeating with the same attemptKey changes nothing',
  method: 'post',
  path: '/api/courses/:courseId/receipts',
  access: staff('front_desk', 'manager'),
  params: z.object({ courseId: idField }),
  body: z.strictObject({
    attemptKey: attemptField,
    payerName: lineField(160),
    tenders: z
      .array(
        z.strictObject({
          tender: deskTender,
          amountMinor: positiveMinorField,
          reference: lineField(80).optional(),
        }),
      )
      .min(1, 'name at least one tender')
      .max(8),
  }),
  response: receiptSchema,
  status: 201,
  problems: ['refused', 'conflict'],
});

export const getReceipt = defineContract({
  id: 'getReceipt',
  summary: 'A receipt with its tenders',
  method: 'get',
  path: '/api/receipts/:receiptId',
  access: staff('counsellor', 'front_desk', 'manager', 'auditor'),
  params: z.object({ receiptId: idField }),
  response: receiptSchema,
});

export const listReceipts = defineContract({
  id: 'listReceipts',
  summary: 'Receipts of a site booked on a day',
  method: 'get',
  path: '/api/sites/:siteId/receipts',
  access: staff('front_desk', 'manager', 'auditor'),
  params: z.object({ siteId: idField }),
  query: z.object({ day: dayField }),
  response: z.object({ receipts: z.array(receiptSchema) }),
});

export const voidReceipt = defineContract({
  id: 'voidReceipt',
  summary: 'Void a receipt of the open day; the number stays, the entry is reversed',
  method: 'post',
  path: '/api/receipts/:receiptId/void',
  access: staff('front_desk', 'manager'),
  params: z.object({ receiptId: idField }),
  body: z.strictObject({ reason: reasonField }),
  response: receiptSchema,
  problems: ['refused', 'conflict'],
});

export const checkoutSchema = z
  .object({
    attemptKey: attemptField,
    state: z.enum(['made', 'open', 'paid', 'expired', 'failed', 'quarantined']),
    purpose: z.enum(['deposit', 'balance']),
    currency: currencyField,
    amountMinor: amountField,
    /** The hosted page, while it is open. */
    url: z.string().nullable(),
    receiptId: idField.nullable(),
  })
  .meta({ id: 'Checkout' });

export type CheckoutView = z.output<typeof checkoutSchema>;
