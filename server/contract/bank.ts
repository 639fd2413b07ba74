import { z } from 'zod';
import { defineContract, staff } from './define.ts';
import { currencyField, dayField, derivationSchema, idField, minorField } from './fields.ts';

export const payoutSchema = z
  .object({
    payoutId: idField,
    amountMinor: minorField,
    currency: currencyField,
    createdOn: dayField,
    arrivesOn: dayField,
    state: z.enum(['pending', 'in_transit', 'paid', 'failed', 'canceled']),
    tied: z.boolean(),
    /** What its movements come to in our records; equals the amount when it is tied. */
    movementsMinor: minorField,
    differenceMinor: minorField,
    why: derivationSchema,
  })
  .meta({ id: 'Payout' });

export const payoutLineSchema = z
  .object({
    balanceTransactionId: idField,
    category: z.string(),
    happenedOn: dayField,
    grossMinor: minorField,
    feeMinor: minorField,
    netMinor: minorField,
    receiptId: idField.nullable(),
    receiptNumber: z.string().nullable(),
    payerName: z.string().nullable(),
  })
  .meta({ id: 'PayoutLine' });

export type PayoutView = z.output<typeof payoutSchema>;
export type PayoutLineView = z.output<typeof payoutLineSchema>;

export const listPayouts = defineContract({
  id: 'listPayouts',
  summary: 'Payouts of the processor with what they are made of, and what is still to be paid out',
  method: 'get',
  path: '/api/payouts',
  access: staff('front_desk', 'manager', 'auditor'),
  response: z.object({
    payouts: z.array(payoutSchema),
    waiting: z.array(payoutLineSchema),
    waitingMinor: minorField,
    onlineClearingMinor: minorField,
  }),
});

export const getPayout = defineContract({
  id: 'getPayout',
  summary: 'A payout and every movement in it, each tied to its receipt',
  method: 'get',
  path: '/api/payouts/:payoutId',
  access: staff('front_desk', 'manager', 'auditor'),
  params: z.object({ payoutId: idField }),
  response: z.object({ payout: payoutSchema, lines: z.array(payoutLineSchema) }),
});

export const pullPayouts = defineContract({
  id: 'pullPayouts',
  summary: 'Ask the processor now for payouts and movements; the house also does so by itself',
  method: 'post',
  path: '/api/payouts/pull',
  access: staff('front_desk', 'manager'),
  response: z.object({ tied: z.int() }),
  problems: ['unavailable'],
});
