import { z } from 'zod';
import type { Prescription } from '#domain/prescription/index';
import type { CostBook } from '#domain/pricing/costs';
import type { CourseInput, PriceBook } from '#domain/pricing/index';
import { amountField, currencyField, dayField, lateralityField, positiveMinorField } from './fields.ts';

/**
 * The shapes in which prices travel: what is asked of the engine, and a price book as a file.
 * They hold the shape only; whether it can be priced is the engine's answer, whether a book is sound
 * `validatePriceBook`'s.
 */

const ruleId = z
  .string()
  .regex(/^[a-z0-9][a-z0-9.-]{0,63}$/, 'needs lower-case letters, digits, points and dashes');
const words = z.string().trim().min(1, 'cannot be empty').max(200);
const rateBp = z.int('needs whole basis points').min(0).max(10_000);
const count = (least: number, most: number) => z.int('needs a whole number').min(least).max(most);

/** Milli-dioptres, degrees and millimetres; the domain says what is wrong with them in words. */
export const prescriptionSchema = z
  .strictObject({
    sphereMd: z.int(),
    cylinderMd: z.int().nullable(),
    axisDeg: z.int().nullable(),
    vertexMm: z.int(),
  })
  .meta({ id: 'Prescription' }) satisfies z.ZodType<Prescription>;

const eyeWishSchema = z
  .strictObject({ procedureId: ruleId, prescription: prescriptionSchema, coverId: ruleId.nullable() })
  .nullable();

const surgerySchema = z.discriminatedUnion('plan', [
  z.strictObject({ plan: z.literal('same_session'), on: dayField.nullable() }),
  z.strictObject({
    plan: z.literal('staged'),
    on: z.strictObject({ OD: dayField.nullable(), OS: dayField.nullable() }),
  }),
]);

const offSchema = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('rate'), rateBp }),
  z.strictObject({ kind: z.literal('amount'), amountMinor: positiveMinorField }),
]);

/** Everything a price depends on besides the book. */
export const courseInputSchema = z
  .strictObject({
    quotedOn: dayField,
    acceptedOn: dayField.nullable(),
    priceListId: ruleId.nullable(),
    eyes: z.strictObject({ OD: eyeWishSchema, OS: eyeWishSchema }),
    surgery: surgerySchema,
    approvedPlan: z
      .strictObject({
        approvedBy: words,
        approvedOn: dayField,
        expiresOn: dayField,
        procedureIds: z.strictObject({ OD: z.array(ruleId).max(50), OS: z.array(ruleId).max(50) }),
      })
      .nullable(),
    addOns: z.array(z.strictObject({ addOnId: ruleId, laterality: lateralityField })).max(50),
    packageId: ruleId.nullable(),
    discounts: z.array(z.strictObject({ discountId: ruleId, off: offSchema })).max(20),
    paymentPlanId: ruleId.nullable(),
  })
  .meta({ id: 'CourseInput' }) satisfies z.ZodType<CourseInput>;

const chargeSchema = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('amount'), amountMinor: amountField }),
  z.strictObject({ kind: z.literal('rate'), rateBp }),
]);
const scopeSchema = z.union([
  z.enum(['everything', 'surgery']),
  z.strictObject({ ruleIds: z.array(ruleId).min(1).max(100) }),
]);
const priced = { priceMinor: amountField, standAloneMinor: amountField, taxClassId: ruleId };

const taxClassSchema = z.strictObject({
  id: ruleId,
  label: words,
  treatment: z.enum(['exempt', 'taxed']),
  exemptionReason: words.nullable(),
  stated: z.enum(['included', 'excluded']),
  goesBy: z.enum(['surgery', 'quote']),
  rates: z.array(z.strictObject({ from: dayField, rateBp })).max(100),
});

const bandSchema = z.strictObject({
  id: ruleId,
  label: words,
  measure: z.enum(['meridian', 'cylinder']),
  procedureIds: z.array(ruleId).min(1).max(100),
  fromMd: count(0, 42_000),
  fromIncluded: z.boolean(),
  toMd: count(0, 42_000).nullable(),
  toIncluded: z.boolean(),
  charge: chargeSchema,
  requiresAddOnIds: z.array(ruleId).max(20),
});

const secondEyeSchema = z.strictObject({
  id: ruleId,
  label: words,
  procedureIds: z.tuple([ruleId, ruleId]),
  sameSession: chargeSchema.nullable(),
  staged: z.strictObject({ withinDays: count(1, 3_650), off: chargeSchema }).nullable(),
  ifNever: z
    .discriminatedUnion('kind', [
      z.strictObject({ kind: z.literal('first_eye_keeps_its_price') }),
      z.strictObject({ kind: z.literal('supplement'), amountMinor: amountField }),
    ])
    .nullable(),
});

const followUpSchema = z.strictObject({
  id: ruleId,
  label: words,
  per: z.enum(['course', 'eye']),
  ...priced,
  visits: z
    .array(z.strictObject({ label: words, afterDays: count(0, 3_650), windowDays: count(0, 365) }))
    .max(50),
});

const coverSchema = z.strictObject({
  id: ruleId,
  label: words,
  months: count(1, 600),
  earliestMonth: count(0, 600),
  countPerEye: count(1, 100),
  thresholdMd: count(0, 30_000),
  thresholdOf: z.enum(['spherical_equivalent', 'cylinder', 'either']),
  examinationEveryMonths: count(1, 600).nullable(),
  ...priced,
  priceOutOfCoverMinor: amountField.nullable(),
  carriesDiscount: z.boolean(),
});

const packageSchema = z.strictObject({
  id: ruleId,
  label: words,
  eyes: z.enum(['one', 'both']),
  procedureIds: z.array(ruleId).min(1).max(100),
  price: chargeSchema,
  taxClassId: ruleId,
  includes: z.strictObject({
    bands: z.boolean(),
    aftercare: z.boolean(),
    addOnIds: z.array(ruleId).max(50),
    coverId: ruleId.nullable(),
  }),
  included: z.array(words).max(50),
  notIncluded: z.array(words).max(50),
  mayCostMore: z.boolean(),
});

const priceListSchema = z.strictObject({
  id: ruleId,
  label: words,
  evidence: words.nullable(),
  rule: z.discriminatedUnion('kind', [
    z.strictObject({ kind: z.literal('rate'), rateBp, scope: scopeSchema }),
    z.strictObject({ kind: z.literal('prices'), prices: z.record(ruleId, amountField) }),
  ]),
  combinesWithDiscounts: z.boolean(),
});

const discountSchema = z.strictObject({
  id: ruleId,
  reason: words,
  off: z.discriminatedUnion('kind', [
    z.strictObject({
      kind: z.literal('rate'),
      scope: scopeSchema,
      ownLimitBp: rateBp,
      approverLimitBp: rateBp,
    }),
    z.strictObject({
      kind: z.literal('amount'),
      ownLimitMinor: amountField,
      approverLimitMinor: amountField,
    }),
  ]),
  stackingGroup: words,
  aftercare: z.strictObject({ followUpId: ruleId.nullable(), coverId: ruleId.nullable(), words }).nullable(),
});

const planned = {
  id: ruleId,
  label: words,
  instalments: count(1, 120),
  takesDeposit: z.boolean(),
  leastMinor: amountField,
};
const paymentPlanSchema = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('interest_free'), ...planned }),
  z.strictObject({ kind: z.literal('fee_bearing'), ...planned, rateBp, taxClassId: ruleId }),
  z.strictObject({ kind: z.literal('lender'), ...planned, rateBp }),
]);

const cancellationSchema = z.strictObject({
  id: ruleId,
  reflectionDays: count(0, 365),
  rungs: z.array(z.strictObject({ id: ruleId, minDaysBefore: count(0, 730), kept: chargeSchema })).max(50),
  noShow: chargeSchema,
  reschedule: z.strictObject({ freeMoves: count(0, 100), fee: chargeSchema }),
});

/** A price book as a file: the published schema of export and import. */
export const priceBookSchema = z
  .strictObject({
    id: ruleId,
    version: count(1, 1_000_000),
    inForceFrom: dayField,
    currency: currencyField,
    taxClasses: z.array(taxClassSchema).max(200),
    procedures: z
      .array(z.strictObject({ id: ruleId, label: words, ...priced, followUpId: ruleId.nullable() }))
      .max(500),
    bands: z.array(bandSchema).max(5_000),
    secondEye: z.array(secondEyeSchema).max(5_000),
    followUps: z.array(followUpSchema).max(200),
    covers: z.array(coverSchema).max(200),
    addOns: z
      .array(
        z.strictObject({
          id: ruleId,
          label: words,
          per: z.enum(['eye', 'session', 'course']),
          ...priced,
          purpose: z.enum(['assessment', 'surgery', 'goods', 'service']),
        }),
      )
      .max(1_000),
    packages: z.array(packageSchema).max(500),
    priceLists: z.array(priceListSchema).max(500),
    discounts: z.array(discountSchema).max(500),
    deposit: z.strictObject({
      id: ruleId,
      charge: chargeSchema,
      floorMinor: amountField.nullable(),
      ceilingMinor: amountField.nullable(),
    }),
    balanceDueDays: count(0, 365),
    paymentPlans: z.array(paymentPlanSchema).max(100),
    cancellation: cancellationSchema,
    validityDays: count(1, 365),
    allocationPolicy: z.enum(['A', 'B']),
    notIncluded: z.array(words).max(50),
  })
  .meta({ id: 'PriceBook' }) satisfies z.ZodType<PriceBook>;

const costs = z.record(ruleId, amountField);

/** What the rules of a book cost the clinic; managers only. */
export const costBookSchema = z
  .strictObject({
    perEyeMinor: costs,
    addOnMinor: costs,
    lender: z.record(ruleId, z.strictObject({ rateBp, fixedMinor: amountField })),
  })
  .meta({ id: 'CostBook' }) satisfies z.ZodType<CostBook>;
