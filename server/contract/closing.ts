import { z } from 'zod';
import { defineContract, staff } from './define.ts';
import {
  amountField,
  currencyField,
  dayField,
  derivationSchema,
  idField,
  instantField,
  lineField,
  minorField,
} from './fields.ts';
import { anyTender } from './payments.ts';

const DESK = staff('front_desk', 'manager');
const dayParams = z.object({ siteId: idField, day: dayField });

export const daySchema = z
  .object({
    siteId: idField,
    siteName: z.string(),
    day: dayField,
    currency: currencyField,
    state: z.enum(['not_opened', 'open', 'counted', 'closed']),
    receiptCount: z.int(),
    lastClosed: dayField.nullable(),
    tills: z
      .array(
        z.object({
          tillId: idField,
          tillSessionId: idField.nullable(),
          name: z.string(),
          state: z.enum(['not_opened', 'open', 'counted', 'closed']),
          shouldHoldMinor: minorField.nullable(),
          shouldHoldWhy: derivationSchema.nullable(),
          holdsMinor: amountField.nullable(),
          differenceMinor: minorField.nullable(),
          reason: z.string().nullable(),
          countedBy: z.string().nullable(),
          closedBy: z.string().nullable(),
        }),
      )
      .readonly(),
    takings: z
      .array(
        z.object({
          tender: anyTender,
          receiptsMinor: minorField,
          receiptsWhy: derivationSchema,
          proofMinor: minorField.nullable(),
          differenceMinor: minorField.nullable(),
          by: z.string(),
        }),
      )
      .readonly(),
    togetherMinor: minorField,
    differenceMinor: minorField,
    exceptions: z
      .array(
        z.object({
          code: z.string(),
          blocking: z.boolean(),
          words: z.string(),
          amountMinor: minorField.nullable(),
        }),
      )
      .readonly(),
    mayClose: z.boolean(),
    countedBy: z.string().nullable(),
    countedByMe: z.boolean(),
    closes: z
      .array(
        z.object({
          dayCloseId: idField,
          versionNo: z.int(),
          askedBy: z.string(),
          closedBy: z.string(),
          closedAt: instantField,
        }),
      )
      .readonly(),
  })
  .meta({ id: 'Day' });

export type DayView = z.output<typeof daySchema>;

export const getDay = defineContract({
  id: 'getDay',
  summary: 'A site’s day: tills, takings by tender, and what needs a person before it can be closed',
  method: 'get',
  path: '/api/sites/:siteId/days/:day',
  access: staff('front_desk', 'manager', 'auditor'),
  params: dayParams,
  response: daySchema,
});

export const enterTerminalBatch = defineContract({
  id: 'enterTerminalBatch',
  summary: 'Enter the card machine’s batch of the day; entering it again replaces it, both stay on record',
  method: 'post',
  path: '/api/sites/:siteId/days/:day/terminal-batches',
  access: DESK,
  params: dayParams,
  body: z.strictObject({
    batchNo: lineField(30),
    amountMinor: amountField,
    slips: z.int().min(0).max(10_000),
  }),
  response: daySchema,
  status: 201,
  problems: ['conflict'],
});

export const countDay = defineContract({
  id: 'countDay',
  summary: 'Say that the day is complete: the first of two people',
  method: 'post',
  path: '/api/sites/:siteId/days/:day/count',
  access: DESK,
  params: dayParams,
  response: daySchema,
  problems: ['refused', 'conflict'],
});

export const closeDay = defineContract({
  id: 'closeDay',
  summary: 'Close a counted day as the second person; nothing is booked on it afterwards',
  method: 'post',
  path: '/api/sites/:siteId/days/:day/close',
  access: DESK,
  params: dayParams,
  response: daySchema,
  problems: ['refused', 'conflict'],
});
