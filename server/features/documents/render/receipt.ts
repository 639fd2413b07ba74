import { type CurrencyCode, formatAmount, type Minor, negate } from '#domain/money/index';
import { type ClinicDate, formatDay, type Instant } from '#domain/time/index';
import { HousePdf } from './house-pdf.ts';

/** A receipt as it is printed. Nothing clinical: a course number and amounts. */
export interface ReceiptModel {
  readonly clinic: { readonly name: string; readonly address: string };
  readonly number: string;
  readonly occurredOn: ClinicDate;
  readonly recordedAt: Instant;
  readonly payerName: string;
  readonly patientName: string;
  readonly courseNumber: string | null;
  readonly currency: CurrencyCode;
  readonly tenders: readonly {
    readonly words: string;
    readonly amountMinor: Minor;
    readonly reference: string | null;
  }[];
  readonly changeMinor: Minor;
  readonly roundingMinor: Minor;
  readonly totalMinor: Minor;
  readonly creditMinor: Minor;
  /** What is left of the course's price after this receipt; null where none is told. */
  readonly leftMinor: Minor | null;
  readonly takenBy: string | null;
  readonly voided: boolean;
}

/** A receipt on A5, or on an 80 mm slip. */
export async function renderReceipt(model: ReceiptModel, size: 'A5' | 'slip' = 'A5'): Promise<Buffer> {
  const { currency } = model;
  const money = (amount: Minor): string => formatAmount(amount, currency);
  const pdf = new HousePdf({
    title: `Receipt ${model.number}`,
    size,
    at: model.recordedAt,
    footer: `${model.clinic.name}, ${model.clinic.address}`,
  });
  pdf.paragraph(`${model.clinic.name}, ${model.clinic.address}`, 'soft');
  pdf.gap(8);
  pdf.heading(model.voided ? `Receipt ${model.number}, void` : `Receipt ${model.number}`);
  pdf.paragraph(
    `${formatDay(model.occurredOn)}${model.takenBy ? `, taken by ${model.takenBy}` : ', paid online'}`,
    'soft',
  );
  pdf.gap(8);
  pdf.figure(
    model.totalMinor,
    currency,
    model.voided
      ? 'This receipt was voided; nothing was received under it.'
      : `received from ${model.payerName}`,
  );
  pdf.gap(8);
  if (model.payerName !== model.patientName) pdf.pair('For', model.patientName);
  if (model.courseNumber) pdf.pair('Towards', `course of care ${model.courseNumber}`);
  for (const tender of model.tenders)
    pdf.pair(
      tender.reference ? `${tender.words}, ${tender.reference}` : tender.words,
      money(tender.amountMinor),
    );
  if (model.changeMinor > 0) pdf.pair('Change given', money(negate(model.changeMinor)));
  if (model.roundingMinor !== 0) pdf.pair('Cash rounding', money(model.roundingMinor));
  pdf.pair('Received', `${currency} ${money(model.totalMinor)}`, true);
  if (model.creditMinor > 0) pdf.pair('Of this, credit on account', money(model.creditMinor));
  if (model.leftMinor !== null) pdf.pair('Left to pay', money(model.leftMinor));
  pdf.gap(10);
  pdf.paragraph('Thank you. Keep this receipt; we can print a copy at any time.', 'soft');
  return await pdf.end();
}
