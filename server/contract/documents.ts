import { z } from 'zod';
import { defineContract, staff } from './define.ts';
import { idField } from './fields.ts';

export const getReceiptPdf = defineContract({
  id: 'getReceiptPdf',
  summary: 'A receipt as PDF: A5 as it was stored, or an 80 mm slip',
  method: 'get',
  path: '/api/receipts/:receiptId/pdf',
  access: staff('counsellor', 'front_desk', 'manager', 'auditor'),
  params: z.object({ receiptId: idField }),
  query: z.object({ paper: z.enum(['a5', 'slip']).default('a5') }),
  response: z.unknown(),
  produces: 'application/pdf',
});

export const getQuotePdf = defineContract({
  id: 'getQuotePdf',
  summary: 'An issued version of a quote as PDF',
  method: 'get',
  path: '/api/quote-versions/:quoteVersionId/pdf',
  access: staff('counsellor', 'front_desk', 'manager', 'auditor'),
  params: z.object({ quoteVersionId: idField }),
  response: z.unknown(),
  produces: 'application/pdf',
});

export const getDayClosePdf = defineContract({
  id: 'getDayClosePdf',
  summary: 'The report of a closed day as PDF',
  method: 'get',
  path: '/api/day-closes/:dayCloseId/pdf',
  access: staff('front_desk', 'manager', 'auditor'),
  params: z.object({ dayCloseId: idField }),
  response: z.unknown(),
  produces: 'application/pdf',
});
