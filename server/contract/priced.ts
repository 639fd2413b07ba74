import { z } from 'zod';
import type { PricedCourse } from '#domain/pricing/index';
import { amountField, currencyField, dayField, eyeField, lateralityField, minorField } from './fields.ts';

/** A priced course as it travels: what the engine gives, whole, for the clinic's own people. Costs are never in it. */

function list<S extends z.ZodType>(schema: S) {
  return z.array(schema).readonly();
}

const stepSchema = z.union([
  z.object({ label: z.string(), text: z.string() }),
  z.object({ label: z.string(), amountMinor: minorField }),
  z.object({ label: z.string(), rateBp: z.int() }),
  z.object({ label: z.string(), powerMd: z.int() }),
  z.object({ label: z.string(), sizeMd: z.int() }),
  z.object({
    label: z.string(),
    sphereMd: z.int(),
    cylinderMd: z.int().nullable(),
    axisDeg: z.int().nullable(),
  }),
]);

const lineSchema = z.object({
  id: z.string(),
  row: z.string(),
  kind: z.enum([
    'procedure',
    'band',
    'second_eye',
    'add_on',
    'aftercare',
    'cover',
    'package',
    'package_rate',
    'price_list',
    'discount',
    'instalment_charge',
    'tax',
  ]),
  ruleId: z.string(),
  ruleLine: z.int(),
  label: z.string(),
  detail: z.string().nullable(),
  laterality: lateralityField,
  amountMinor: minorField,
  taxClassId: z.string().nullable(),
  why: list(stepSchema),
});

const taxSchema = z.object({
  taxClassId: z.string(),
  label: z.string(),
  treatment: z.enum(['exempt', 'taxed']),
  stated: z.enum(['included', 'excluded']),
  exemptionReason: z.string().nullable(),
  rateBp: z.int(),
  netMinor: minorField,
  taxMinor: minorField,
  grossMinor: minorField,
});

const columnsSchema = z.object({ OD: minorField, OS: minorField, OU: minorField });

const dueSchema = z.object({
  id: z.string(),
  kind: z.enum(['deposit', 'balance', 'instalment', 'lender']),
  label: z.string(),
  detail: z.string(),
  dueOn: dayField.nullable(),
  amountMinor: amountField,
  from: z.enum(['patient', 'lender']),
});

const creditSchema = z.object({
  planId: z.string(),
  label: z.string(),
  kind: z.enum(['interest_free', 'fee_bearing', 'lender']),
  creditMinor: amountField,
  chargeMinor: amountField,
  payableMinor: amountField,
  nominalRateBp: z.int(),
  aprBp: z.int(),
  instalments: list(z.object({ dueOn: dayField, amountMinor: amountField })),
});

const obligationSchema = z.object({
  id: z.string(),
  kind: z.enum([
    'assessment',
    'surgery',
    'aftercare',
    'enhancement',
    'goods',
    'service',
    'instalment_charge',
  ]),
  label: z.string(),
  laterality: lateralityField,
  standAloneMinor: amountField,
  allocatedMinor: amountField,
  parts: list(
    z.object({
      id: z.string(),
      label: z.string(),
      laterality: lateralityField,
      amountMinor: amountField,
    }),
  ),
});

const cancellationSchema = z.object({
  event: z.enum(['reflection', 'cancels', 'no_show', 'unsuitable', 'clinic_cancels', 'moves']),
  until: dayField.nullable(),
  label: z.string(),
  detail: z.string(),
  keptMinor: amountField,
  paidMinor: amountField.nullable(),
  comesBackMinor: amountField.nullable(),
});

const coverSchema = z.object({
  eye: eyeField,
  coverId: z.string(),
  label: z.string(),
  months: z.int(),
  earliestMonth: z.int(),
  from: dayField.nullable(),
  until: dayField.nullable(),
  count: z.int(),
  thresholdMd: z.int(),
  thresholdOf: z.enum(['spherical_equivalent', 'cylinder', 'either']),
  examinationEveryMonths: z.int().nullable(),
  priceOutOfCoverMinor: amountField,
  conditions: list(z.string()),
});

const packageSchema = z.object({
  packageId: z.string(),
  label: z.string(),
  partsMinor: amountField,
  priceMinor: amountField,
  savesMinor: minorField,
  chargedAsParts: z.boolean(),
});

const approvalSchema = z.object({
  discountId: z.string(),
  reason: z.string(),
  asked: z.string(),
  ownLimit: z.string(),
  approverLimit: z.string(),
});

const warningSchema = z.object({
  code: z.enum([
    'estimate',
    'plan_expired',
    'plan_expires_before_surgery',
    'no_surgery_day',
    'second_eye_reduction_missed',
    'second_eye_condition',
    'package_no_cheaper',
    'aftercare_changed',
    'approval_needed',
    'evidence_needed',
    'not_interest_free_exempt',
  ]),
  words: z.string(),
  eye: eyeField.nullable(),
});

export const pricedCourseSchema = z
  .object({
    engine: z.string(),
    book: z.object({ id: z.string(), version: z.int(), inForceFrom: dayField }),
    currency: currencyField,
    standing: z.enum(['quotable', 'estimate']),
    quotedOn: dayField,
    validUntil: dayField,
    lines: list(lineSchema),
    columns: columnsSchema,
    shares: columnsSchema,
    taxes: list(taxSchema),
    netMinor: minorField,
    taxMinor: minorField,
    totalMinor: amountField,
    depositMinor: amountField,
    schedule: list(dueSchema),
    credit: creditSchema.nullable(),
    obligations: list(obligationSchema),
    cancellation: list(cancellationSchema),
    cover: list(coverSchema),
    included: list(z.object({ ruleId: z.string(), label: z.string() })),
    notIncluded: list(z.string()),
    package: packageSchema.nullable(),
    approvals: list(approvalSchema),
    warnings: list(warningSchema),
  })
  .meta({ id: 'PricedCourse' }) satisfies z.ZodType<PricedCourse>;

export const refusalSchema = z
  .object({ field: z.string(), code: z.string(), words: z.string(), change: z.string() })
  .meta({ id: 'PriceRefusal' });

/** A priced course as a handler sends it. */
export type PricedWire = z.input<typeof pricedCourseSchema>;
