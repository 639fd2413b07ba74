import { getDayClosePdf, getQuotePdf, getReceiptPdf } from '#contract/documents';
import { type BoundRoute, route } from '#server/http/route';
import { mustWorkAt, type StaffActor } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import type { DocumentKind } from '#server/platform/outbox';
import { type DocumentMakers, documentFor } from './document-for.ts';
import { receiptModel } from './makers.ts';
import { renderReceipt } from './render/receipt.ts';

export function documentsRoutes(deps: Deps, makers: DocumentMakers): BoundRoute[] {
  const stored = async (kind: DocumentKind, id: number, actor: StaffActor) => {
    const document = await documentFor(deps, makers, kind, id);
    mustWorkAt(actor, document.siteId, 'document');
    return { bytes: document.bytes, filename: document.filename, inline: true };
  };
  return [
    route(getReceiptPdf, async ({ params, query, actor }) => {
      if (query.paper === 'a5') return await stored('receipt', params.receiptId, actor);
      const model = await receiptModel(deps.db, params.receiptId);
      mustWorkAt(actor, model.siteId, 'receipt');
      return {
        bytes: await renderReceipt(model, 'slip'),
        filename: `receipt-${model.number}-slip.pdf`,
        inline: true,
      };
    }),
    route(getQuotePdf, async ({ params, actor }) => await stored('quote', params.quoteVersionId, actor)),
    route(getDayClosePdf, async ({ params, actor }) => await stored('day_close', params.dayCloseId, actor)),
  ];
}
