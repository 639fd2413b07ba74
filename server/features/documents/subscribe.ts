import type { ClinicDate } from '#domain/time/index';
import { rawRows, type Trx } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { queueMail } from '#server/platform/outbox';
import { clinicAt, receiptModel } from './makers.ts';
import { quoteMail, receiptMail } from './render/mails.ts';

/** What is mailed when something happened: in the transaction of the fact, sent after it. */
export function subscribeDocuments(deps: Deps): void {
  deps.facts.subscribe('quote.issued', async (trx, fact) => {
    if (fact.linkUrl === null || fact.email === null) return;
    const [row] = await rawRows<{ number: string; given_name: string; valid_until: ClinicDate }>(
      trx,
      `SELECT q.number, p.given_name, v.valid_until FROM quotes q JOIN patients p ON p.patient_id = q.patient_id
       JOIN quote_versions v ON v.quote_version_id = ? WHERE q.quote_id = ?`,
      [fact.quoteVersionId, fact.quoteId],
    );
    if (!row) return;
    const clinic = await clinicAt(trx, fact.siteId);
    await queueMail(trx, deps, {
      kind: 'quote_sent',
      dedupeKey: `quote-link-${fact.quoteLinkId}`,
      to: fact.email,
      mail: quoteMail({
        givenName: row.given_name,
        clinic: clinic.name,
        number: row.number,
        validUntil: row.valid_until,
        linkUrl: fact.linkUrl,
      }),
      attachments: [{ document: 'quote', id: fact.quoteVersionId }],
      subjectType: 'quote',
      subjectId: fact.quoteId,
    });
  });
  deps.facts.subscribe('receipt.recorded', async (trx, fact) => {
    const email = await emailOf(trx, fact.receiptId);
    if (email === null) return;
    const model = await receiptModel(trx, fact.receiptId);
    await queueMail(trx, deps, {
      kind: 'receipt',
      dedupeKey: `receipt-${fact.receiptId}`,
      to: email,
      mail: receiptMail({
        ...model,
        clinic: model.clinic.name,
        leftMinor: model.leftMinor ?? model.changeMinor,
      }),
      attachments: [{ document: 'receipt', id: fact.receiptId }],
      subjectType: 'receipt',
      subjectId: fact.receiptId,
    });
  });
}

async function emailOf(trx: Trx, receiptId: number): Promise<string | null> {
  const [row] = await rawRows<{ email: string | null }>(
    trx,
    'SELECT p.email FROM receipts r JOIN patients p ON p.patient_id = r.patient_id WHERE r.receipt_id = ?',
    [receiptId],
  );
  return row?.email ?? null;
}
