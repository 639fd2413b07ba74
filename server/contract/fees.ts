import { z } from 'zod';
import { pairEyeSchema } from './courses.ts';
import { defineContract, staff } from './define.ts';
import {
  amountField,
  currencyField,
  dayField,
  derivationSchema,
  eyeField,
  idField,
  minorField,
} from './fields.ts';

export const feeRowSchema = z
  .object({
    courseId: idField,
    /** Initials only: a fee statement names no patient. */
    patientInitials: z.string(),
    procedureName: z.string(),
    doneOn: dayField,
    eye: eyeField,
    kind: z.enum(['accrual', 'clawback', 'held']),
    amountMinor: minorField,
    heldReason: z.string().nullable(),
    why: derivationSchema,
    pair: z.array(pairEyeSchema),
  })
  .meta({ id: 'FeeRow' });

export type FeeRowView = z.output<typeof feeRowSchema>;

export const feeMonthSchema = z
  .object({
    surgeon: z.object({ userId: idField, name: z.string() }),
    month: dayField,
    currency: currencyField,
    agreementVersion: z.int().nullable(),
    eyes: z.int(),
    accruedMinor: minorField,
    clawedBackMinor: minorField,
    heldCount: z.int(),
    totalMinor: minorField,
    totalWhy: derivationSchema,
    rows: z.array(feeRowSchema),
  })
  .meta({ id: 'FeeMonth' });

export const getFeeMonth = defineContract({
  id: 'getFeeMonth',
  summary: 'A surgeon’s eyes of a month, each with its fee and why; surgeons see their own alone',
  method: 'get',
  path: '/api/surgeons/:surgeonId/fees',
  access: staff('surgeon', 'manager', 'auditor'),
  params: z.object({ surgeonId: idField }),
  query: z.object({ month: dayField }),
  response: feeMonthSchema,
});

export const listSurgeons = defineContract({
  id: 'listSurgeons',
  summary: 'Surgeons with what each is owed; a surgeon sees only themselves',
  method: 'get',
  path: '/api/surgeons',
  access: staff('surgeon', 'manager', 'auditor'),
  response: z.object({
    currency: currencyField,
    surgeons: z.array(
      z.object({
        userId: idField,
        name: z.string(),
        payableMinor: minorField,
        agreementVersion: z.int().nullable(),
        agreedSince: dayField.nullable(),
      }),
    ),
  }),
});

const feeBasis = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('per_eye'), byProcedure: z.record(z.string(), amountField) }),
  z.strictObject({
    kind: z.literal('rate_of_collected'),
    rateBp: z.int().min(0).max(10_000),
    lessPaymentCosts: z.boolean(),
    lessDirectCosts: z.boolean(),
  }),
  z.strictObject({
    kind: z.literal('volume_bands'),
    reading: z.enum(['marginal', 'whole']),
    per: z.enum(['month', 'year']),
    bands: z
      .array(z.strictObject({ fromEye: z.int().min(1), perEyeMinor: amountField }))
      .min(1)
      .max(20)
      .readonly(),
  }),
]);

export const feeTermsSchema = z
  .strictObject({
    currency: currencyField,
    basis: feeBasis,
    enhancement: z
      .discriminatedUnion('kind', [
        z.strictObject({ kind: z.literal('per_eye'), amountMinor: amountField }),
        z.strictObject({ kind: z.literal('rate_of_collected'), rateBp: z.int().min(0).max(10_000) }),
      ])
      .nullable(),
    trigger: z.enum(['done_and_collected', 'done']),
    monthlyCapMinor: amountField.nullable(),
    guarantee: z
      .strictObject({ leastMinor: amountField, shortfall: z.enum(['carried', 'forgiven']) })
      .nullable(),
    sharedCare: z.strictObject({ careRateBp: z.int().min(0).max(10_000), days: z.int().min(1) }).nullable(),
    withholding: z
      .array(
        z.strictObject({
          from: dayField,
          rateBp: z.int().min(0).max(10_000),
          yearlyThresholdMinor: amountField.nullable(),
          onceOver: z.enum(['whole_year', 'excess']),
        }),
      )
      .readonly(),
  })
  .meta({ id: 'FeeTerms' });

export const listFeeAgreements = defineContract({
  id: 'listFeeAgreements',
  summary: 'Every version of a surgeon’s fee agreement',
  method: 'get',
  path: '/api/surgeons/:surgeonId/fee-agreements',
  access: staff('surgeon', 'manager', 'auditor'),
  params: z.object({ surgeonId: idField }),
  response: z.object({
    agreements: z.array(
      z.object({ feeAgreementId: idField, versionNo: z.int(), effectiveOn: dayField, terms: feeTermsSchema }),
    ),
  }),
});

export const agreeFee = defineContract({
  id: 'agreeFee',
  summary: 'Add a version of a surgeon’s fee agreement from a day on; earlier versions stay',
  method: 'post',
  path: '/api/surgeons/:surgeonId/fee-agreements',
  access: staff('manager'),
  params: z.object({ surgeonId: idField }),
  body: z.strictObject({ effectiveOn: dayField, terms: feeTermsSchema }),
  response: z.object({ feeAgreementId: idField, versionNo: z.int() }),
  status: 201,
  problems: ['refused', 'conflict'],
});
