import { getReceipt, listReceipts, takePayment, voidReceipt } from '#contract/payments';
import { type BoundRoute, route } from '#server/http/route';
import { mustWorkAt } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import { receiptOf, receiptsOfDay } from './receipts-read.ts';
import { takeDeskPayment } from './take-payment.ts';
import { voidDeskReceipt } from './void-receipt.ts';

export function paymentsRoutes(deps: Deps): BoundRoute[] {
  return [
    route(
      takePayment,
      async ({ params, body, actor }) =>
        await takeDeskPayment(deps, { courseId: params.courseId, ...body, actor }),
    ),
    route(
      voidReceipt,
      async ({ params, body, actor }) => await voidDeskReceipt(deps, params.receiptId, body.reason, actor),
    ),
    route(getReceipt, async ({ params, actor }) => {
      const receipt = await receiptOf(deps.db, params.receiptId);
      if (!receipt) throw notFound('receipt');
      mustWorkAt(actor, receipt.siteId, 'receipt');
      return receipt;
    }),
    route(listReceipts, async ({ params, query, actor }) => {
      mustWorkAt(actor, params.siteId, 'site');
      return { receipts: await receiptsOfDay(deps.db, params.siteId, query.day) };
    }),
  ];
}
