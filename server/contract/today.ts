import { z } from 'zod';
import { pairEyeSchema } from './courses.ts';
import { defineContract, staff } from './define.ts';
import { amountField, currencyField, dayField, derivationSchema, idField, instantField } from './fields.ts';

export const todaySchema = z
  .object({
    siteId: idField,
    day: dayField,
    currency: currencyField,
    /** Courses with an eye planned or done on the day, in the order of names. */
    surgery: z.array(
      z.object({
        courseId: idField,
        courseNumber: z.string(),
        patientId: idField,
        patientName: z.string(),
        surgeonName: z.string(),
        eyes: z.array(pairEyeSchema),
        eyesToday: z.array(z.enum(['OD', 'OS'])),
        procedures: z.string(),
        /** What must be paid before the surgeon may start on today's eyes. */
        owedMinor: amountField,
        owedWhy: derivationSchema,
      }),
    ),
    /** Online payments recorded since the day began. */
    paidOnline: z.array(
      z.object({
        receiptId: idField,
        number: z.string(),
        courseId: idField,
        patientName: z.string(),
        purpose: z.string(),
        totalMinor: amountField,
        recordedAt: instantField,
      }),
    ),
    /** Sums due by today and not paid, of courses without surgery today. */
    dueNow: z.array(
      z.object({
        courseId: idField,
        courseNumber: z.string(),
        patientName: z.string(),
        dueMinor: amountField,
        since: dayField,
      }),
    ),
    accepted: z.array(
      z.object({
        courseId: idField,
        courseNumber: z.string(),
        patientName: z.string(),
        totalMinor: amountField,
        acceptedAt: instantField,
      }),
    ),
    approvalsWaiting: z.int(),
  })
  .meta({ id: 'Today' });

export type TodayView = z.output<typeof todaySchema>;

export const getToday = defineContract({
  id: 'getToday',
  summary: 'The front desk’s day: who comes, what each owes before the surgeon may start, who paid online',
  method: 'get',
  path: '/api/sites/:siteId/today',
  access: staff('counsellor', 'front_desk', 'surgeon', 'manager', 'auditor'),
  params: z.object({ siteId: idField }),
  query: z.object({ day: dayField.optional() }),
  response: todaySchema,
});

export const followLive = defineContract({
  id: 'followLive',
  summary:
    'Hints that something changed at one’s sites, as server-sent events; fetch anew, rely on nothing in them',
  method: 'get',
  path: '/api/live',
  access: staff('counsellor', 'front_desk', 'surgeon', 'manager', 'auditor'),
  response: z.unknown(),
  produces: 'text/event-stream',
});
