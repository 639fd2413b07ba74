import { z } from 'zod';
import { defineContract, staff } from './define.ts';
import { currencyField, dayField, instantField, minorField } from './fields.ts';

export const proofRowSchema = z
  .object({
    label: z.string(),
    leftMinor: minorField.nullable(),
    rightMinor: minorField.nullable(),
    differenceMinor: minorField.nullable(),
    /** What is wrong, where it is not a matter of sums. */
    finding: z.string().nullable(),
    /** Page of the application that shows where it comes from. */
    link: z.string().nullable(),
  })
  .meta({ id: 'ProofRow' });

export const proofControlSchema = z
  .object({
    id: z.string(),
    title: z.string(),
    /** How each side is found, in words. */
    leftWords: z.string(),
    rightWords: z.string(),
    leftMinor: minorField.nullable(),
    rightMinor: minorField.nullable(),
    differenceMinor: minorField.nullable(),
    checked: z.int(),
    tied: z.boolean(),
    rows: z.array(proofRowSchema),
  })
  .meta({ id: 'ProofControl' });

export type ProofControlView = z.output<typeof proofControlSchema>;

export const getProof = defineContract({
  id: 'getProof',
  summary: 'Every control total computed two independent ways, as of a day, in one snapshot',
  method: 'get',
  path: '/api/proof',
  access: staff('manager', 'auditor'),
  query: z.object({ asOf: dayField.optional() }),
  response: z.object({
    asOf: dayField,
    computedAt: instantField,
    currency: currencyField,
    tied: z.boolean(),
    controls: z.array(proofControlSchema),
  }),
});
