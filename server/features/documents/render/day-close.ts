import type { DayView } from '#contract/closing';
import { formatAmount, type Minor } from '#domain/money/index';
import { TENDER_LABEL } from '#domain/payments/index';
import { formatDayWithWeekday, formatTime, type Instant } from '#domain/time/index';
import { HousePdf } from './house-pdf.ts';

/** A closed day as it stood when two people closed it. */
export interface DayCloseModel {
  readonly clinic: { readonly name: string; readonly address: string };
  readonly zone: string;
  readonly day: DayView;
  readonly versionNo: number;
  readonly askedBy: string;
  readonly closedBy: string;
  readonly closedAt: Instant;
  /** Newest seal of the audit chain, hexadecimal; what was before it cannot be changed unnoticed. */
  readonly chainHead: string | null;
}

/** The report of a closed day on A4. */
export async function renderDayClose(model: DayCloseModel): Promise<Buffer> {
  const { day } = model;
  const money = (amount: Minor | null): string =>
    amount === null ? '–' : formatAmount(amount, day.currency);
  const tie = (amount: Minor | null): string =>
    amount === null ? 'awaited' : amount === 0 ? 'ties' : money(amount);
  const title = `${day.siteName}, ${formatDayWithWeekday(day.day)}`;
  const pdf = new HousePdf({
    title,
    size: 'A4',
    at: model.closedAt,
    footer: `${model.clinic.name}, ${model.clinic.address}`,
  });
  pdf.paragraph(model.clinic.name, 'soft');
  pdf.heading(title);
  pdf.paragraph(
    `Closed at ${formatTime(model.closedAt, model.zone)}${model.versionNo > 1 ? `, version ${model.versionNo}` : ''}. ${day.receiptCount} receipts.`,
    'soft',
  );
  pdf.heading('Tills', 2);
  pdf.table(
    [
      { head: 'Till', width: 0.2 },
      { head: `should hold, ${day.currency}`, width: 0.18, align: 'right' },
      { head: `holds, ${day.currency}`, width: 0.16, align: 'right' },
      { head: 'difference', width: 0.14, align: 'right' },
      { head: 'counted, closed', width: 0.32, align: 'right' },
    ],
    day.tills.map((till) => [
      till.name,
      money(till.shouldHoldMinor),
      money(till.holdsMinor),
      till.state === 'not_opened' ? '–' : tie(till.differenceMinor),
      till.countedBy
        ? `${till.countedBy}, ${till.closedBy ?? ''}${till.reason ? `: ${till.reason}` : ''}`
        : 'not opened',
    ]),
  );
  pdf.heading('Taken', 2);
  const rows = day.takings.map((taking) => [
    TENDER_LABEL[taking.tender],
    money(taking.receiptsMinor),
    money(taking.proofMinor),
    tie(taking.differenceMinor),
    taking.by,
  ]);
  pdf.table(
    [
      { head: 'Tender', width: 0.2 },
      { head: `receipts, ${day.currency}`, width: 0.18, align: 'right' },
      { head: `proof, ${day.currency}`, width: 0.16, align: 'right' },
      { head: 'difference', width: 0.14, align: 'right' },
      { head: 'by', width: 0.32, align: 'right' },
    ],
    [...rows, ['Together', money(day.togetherMinor), '', '', '']],
    { strongRows: [rows.length] },
  );
  if (day.exceptions.length > 0) {
    pdf.heading('Left open', 2);
    for (const each of day.exceptions) pdf.paragraph(each.words);
  }
  pdf.heading('Closed by two people', 2);
  pdf.pair('Counted and complete', model.askedBy);
  pdf.pair('Closed', model.closedBy);
  pdf.gap(8);
  pdf.paragraph(`Audit chain at the close: ${model.chainHead ?? 'not begun'}`, 'soft');
  return await pdf.end();
}
