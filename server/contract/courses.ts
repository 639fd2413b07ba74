import { z } from 'zod';
import { defineContract, staff } from './define.ts';
import {
  amountField,
  currencyField,
  dayField,
  derivationSchema,
  eyeField,
  idField,
  instantField,
  minorField,
} from './fields.ts';

export const moneyState = z.enum(['none', 'half', 'whole']);
export const eyeState = z.enum(['planned', 'done', 'cancelled']);

/** What a pair mark shows of one eye. */
export const pairEyeSchema = z
  .object({ eye: eyeField, state: eyeState, money: moneyState })
  .meta({ id: 'PairEye' });

export const courseEyeSchema = z
  .object({
    eye: eyeField,
    state: eyeState,
    money: moneyState,
    procedureCode: z.string(),
    procedureName: z.string(),
    plannedOn: dayField.nullable(),
    doneOn: dayField.nullable(),
    priceMinor: amountField,
    /** What is still unpaid of this eye's share: while above zero the surgeon may not start. */
    unpaidMinor: amountField,
    unpaidWhy: derivationSchema,
  })
  .meta({ id: 'CourseEye' });

export const courseDueSchema = z
  .object({
    dueNo: z.int(),
    kind: z.enum(['deposit', 'balance', 'instalment', 'lender']),
    label: z.string(),
    dueOn: dayField.nullable(),
    amountMinor: amountField,
    paidMinor: amountField,
  })
  .meta({ id: 'CourseDue' });

export const receiptSummarySchema = z
  .object({
    receiptId: idField,
    number: z.string(),
    occurredOn: dayField,
    totalMinor: amountField,
    tenders: z.array(z.string()),
    voided: z.boolean(),
  })
  .meta({ id: 'ReceiptSummary' });

export const courseSchema = z
  .object({
    courseId: idField,
    number: z.string(),
    siteId: idField,
    patient: z.object({ patientId: idField, name: z.string(), email: z.string().nullable() }),
    quoteId: idField,
    quoteNumber: z.string(),
    surgeonName: z.string(),
    currency: currencyField,
    acceptedOn: dayField,
    totalMinor: amountField,
    paidMinor: amountField,
    creditMinor: amountField,
    /** Due today and before, less paid. */
    dueNowMinor: amountField,
    dueNowWhy: derivationSchema,
    leftMinor: amountField,
    leftWhy: derivationSchema,
    eyes: z.array(courseEyeSchema),
    dues: z.array(courseDueSchema),
    receipts: z.array(receiptSummarySchema),
    checkout: z
      .object({ state: z.string(), purpose: z.string(), amountMinor: amountField, createdAt: instantField })
      .nullable(),
    notOursYetMinor: minorField,
    notOursYetWhy: derivationSchema,
  })
  .meta({ id: 'Course' });

export type CourseView = z.output<typeof courseSchema>;

export const getCourse = defineContract({
  id: 'getCourse',
  summary: 'A course of care: eyes, what is due and paid, receipts',
  method: 'get',
  path: '/api/courses/:courseId',
  access: staff('counsellor', 'front_desk', 'surgeon', 'manager', 'auditor'),
  params: z.object({ courseId: idField }),
  response: courseSchema,
});
