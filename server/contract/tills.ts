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
  positiveMinorField,
  reasonField,
} from './fields.ts';

const DESK = staff('front_desk', 'manager');

/** Pieces of each note and coin, keyed by its value in minor units. */
const countField = z.record(z.string().regex(/^\d+$/), z.int().min(0).max(100_000));

export const tillSessionSchema = z
  .object({
    tillSessionId: idField,
    dayOn: dayField,
    state: z.enum(['open', 'counted', 'closed']),
    floatMinor: amountField,
    openedBy: z.string(),
    openedAt: instantField,
    movements: z
      .array(
        z.object({
          kind: z.enum(['drop', 'paid_out']),
          amountMinor: amountField,
          reason: z.string(),
          at: instantField,
          by: z.string(),
        }),
      )
      .readonly(),
    /** Blind until counted: null while the till is open. */
    shouldHoldMinor: minorField.nullable(),
    shouldHoldWhy: derivationSchema.nullable(),
    countedMinor: amountField.nullable(),
    differenceMinor: minorField.nullable(),
    differenceReason: z.string().nullable(),
    countedBy: z.string().nullable(),
    countedByMe: z.boolean(),
    closedBy: z.string().nullable(),
  })
  .meta({ id: 'TillSession' });

export const tillSchema = z
  .object({
    tillId: idField,
    name: z.string(),
    /** What it holds overnight: the float to be counted at opening. */
    holdsMinor: minorField.nullable(),
    sessions: z.array(tillSessionSchema).readonly(),
  })
  .meta({ id: 'Till' });

export type TillView = z.output<typeof tillSchema>;

const tillsAnswer = z.object({
  currency: currencyField,
  day: dayField,
  denominations: z.array(z.object({ valueMinor: amountField, kind: z.enum(['note', 'coin']) })).readonly(),
  tills: z.array(tillSchema).readonly(),
});

export const listTills = defineContract({
  id: 'listTills',
  summary: 'The tills of a site on a day',
  method: 'get',
  path: '/api/sites/:siteId/tills',
  access: staff('front_desk', 'manager', 'auditor'),
  params: z.object({ siteId: idField }),
  query: z.object({ day: dayField.optional() }),
  response: tillsAnswer,
});

export const openTill = defineContract({
  id: 'openTill',
  summary: 'Open a till with its counted float',
  method: 'post',
  path: '/api/tills/:tillId/sessions',
  access: DESK,
  params: z.object({ tillId: idField }),
  body: z.strictObject({ floatMinor: amountField }),
  response: tillSessionSchema,
  status: 201,
  problems: ['conflict'],
});

const sessionParams = z.object({ tillSessionId: idField });

export const moveTillCash = defineContract({
  id: 'moveTillCash',
  summary: 'Drop cash to the safe, or pay something small from the till',
  method: 'post',
  path: '/api/till-sessions/:tillSessionId/movements',
  access: DESK,
  params: sessionParams,
  body: z.strictObject({
    kind: z.enum(['drop', 'paid_out']),
    amountMinor: positiveMinorField,
    reason: lineField(200),
  }),
  response: tillSessionSchema,
  status: 201,
  problems: ['conflict', 'refused'],
});

export const countTill = defineContract({
  id: 'countTill',
  summary:
    'Count a till blind, piece by piece; the difference shows afterwards. A counted till may be counted again',
  method: 'post',
  path: '/api/till-sessions/:tillSessionId/count',
  access: DESK,
  params: sessionParams,
  body: z.strictObject({ count: countField }),
  response: tillSessionSchema,
  problems: ['conflict', 'refused'],
});

export const explainTill = defineContract({
  id: 'explainTill',
  summary: 'Give the reason of a difference',
  method: 'put',
  path: '/api/till-sessions/:tillSessionId/reason',
  access: DESK,
  params: sessionParams,
  body: z.strictObject({ reason: reasonField }),
  response: tillSessionSchema,
  problems: ['conflict'],
});

export const closeTill = defineContract({
  id: 'closeTill',
  summary: 'Close a counted till as the second person; the float stays, the rest goes to the bank',
  method: 'post',
  path: '/api/till-sessions/:tillSessionId/close',
  access: DESK,
  params: sessionParams,
  body: z.strictObject({ nextFloatMinor: amountField }),
  response: tillSessionSchema,
  problems: ['conflict', 'refused'],
});
