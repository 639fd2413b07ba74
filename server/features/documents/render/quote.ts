import { type CurrencyCode, formatAmount, type Minor } from '#domain/money/index';
import type { PricedCourse } from '#domain/pricing/index';
import { type ClinicDate, formatDay, formatDayShort, type Instant } from '#domain/time/index';
import { HousePdf } from './house-pdf.ts';

/** A quote as it goes out: one to three options, each with everything the patient decides by. */
export interface QuoteModel {
  readonly clinic: { readonly name: string; readonly address: string };
  readonly number: string;
  readonly versionNo: number;
  readonly patientName: string;
  readonly surgeonName: string | null;
  readonly issuedOn: ClinicDate;
  readonly issuedAt: Instant;
  readonly validUntil: ClinicDate;
  readonly options: readonly { readonly label: string; readonly priced: PricedCourse }[];
}

const CAUTION =
  'Whether an eye may be treated, and how, is the surgeon’s decision; consent is taken in person by the operating doctor. Deposits, reflection periods, credit and tax follow local law.';

/** The quote on A4, an option after the other. */
export async function renderQuote(model: QuoteModel): Promise<Buffer> {
  const pdf = new HousePdf({
    title: `Quote ${model.number}`,
    size: 'A4',
    at: model.issuedAt,
    footer: `${model.clinic.name}, ${model.clinic.address}. ${CAUTION}`,
  });
  pdf.paragraph(`${model.clinic.name}, ${model.clinic.address}`, 'soft');
  pdf.gap(10);
  pdf.heading(`Quote for ${model.patientName}`);
  const version = model.versionNo > 1 ? `, version ${model.versionNo}` : '';
  pdf.paragraph(
    `Quote ${model.number}${version}, ${formatDay(model.issuedOn)}. This price holds until ${formatDay(model.validUntil)}.${model.surgeonName ? ` Surgeon: ${model.surgeonName}.` : ''}`,
    'soft',
  );
  model.options.forEach((option, index) => {
    writeOption(
      pdf,
      option,
      model.options.length > 1 ? `Option ${String.fromCharCode(65 + index)}: ${option.label}` : option.label,
    );
  });
  return await pdf.end();
}

function writeOption(pdf: HousePdf, { priced }: QuoteModel['options'][number], title: string): void {
  const { currency } = priced;
  const money = (amount: Minor): string => formatAmount(amount, currency);
  pdf.gap(8);
  pdf.heading(title, 2);
  if (priced.standing === 'estimate')
    pdf.paragraph(
      'An estimate, subject to assessment: it cannot be accepted before a surgeon has approved it.',
      'strong',
    );
  pdf.figure(
    priced.totalMinor,
    currency,
    priced.taxMinor > 0 ? `tax of ${money(priced.taxMinor)} included` : 'for everything below; tax exempt',
  );
  pdf.gap(6);
  writeLines(pdf, priced, money);
  if (priced.included.length > 0)
    pdf.paragraph(`Included: ${priced.included.map((each) => each.label).join('; ')}.`);
  if (priced.notIncluded.length > 0) pdf.paragraph(`Not included: ${priced.notIncluded.join('; ')}.`, 'soft');
  pdf.heading('What you pay, and when', 2);
  pdf.table(
    [
      { head: 'When', width: 0.42 },
      { head: '', width: 0.34 },
      { head: currency, width: 0.24, align: 'right' },
    ],
    priced.schedule.map((due) => [
      due.dueOn ? `${due.label}, ${formatDayShort(due.dueOn)}` : due.label,
      due.detail,
      money(due.amountMinor),
    ]),
  );
  pdf.heading('If you change your mind', 2);
  pdf.table(
    [
      { head: 'When', width: 0.52 },
      { head: `kept, ${currency}`, width: 0.24, align: 'right' },
      { head: `comes back, ${currency}`, width: 0.24, align: 'right' },
    ],
    priced.cancellation.map((row) => [
      ladderWords(row.label, row.until, row.detail),
      money(row.keptMinor),
      row.comesBackMinor === null ? 'all' : money(row.comesBackMinor),
    ]),
  );
  writeCover(pdf, priced, currency);
}

function ladderWords(label: string, until: ClinicDate | null, detail: string): string {
  const when = until === null ? label : `${label}, until ${formatDayShort(until)}`;
  return detail === '' ? when : `${when} (${detail})`;
}

/** The rows of the quote's table: what stands in one row stands in its eye's column. */
function writeLines(pdf: HousePdf, priced: PricedCourse, money: (amount: Minor) => string): void {
  const rows = new Map<string, { label: string; detail: string; OD: string; OS: string; OU: string }>();
  for (const line of priced.lines) {
    const row = rows.get(line.row) ?? { label: line.label, detail: '', OD: '', OS: '', OU: '' };
    row[line.laterality] = money(line.amountMinor);
    if (line.detail && !row.detail.includes(line.detail))
      row.detail = row.detail === '' ? line.detail : `${row.detail}; ${line.detail}`;
    rows.set(line.row, row);
  }
  const { columns } = priced;
  const body = [...rows.values()].map((row) => [
    row.detail === '' ? row.label : `${row.label}: ${row.detail}`,
    row.OD,
    row.OS,
    row.OU,
  ]);
  pdf.table(
    [
      { head: '', width: 0.46 },
      { head: `right eye, ${priced.currency}`, width: 0.18, align: 'right' },
      { head: `left eye, ${priced.currency}`, width: 0.18, align: 'right' },
      { head: `both, ${priced.currency}`, width: 0.18, align: 'right' },
    ],
    [...body, ['Together', money(columns.OD), money(columns.OS), money(columns.OU)]],
    { strongRows: [body.length] },
  );
  pdf.gap(6);
}

function writeCover(pdf: HousePdf, priced: PricedCourse, currency: CurrencyCode): void {
  if (priced.cover.length === 0) return;
  pdf.heading('A second treatment, should you need one', 2);
  for (const cover of priced.cover) {
    const eye = cover.eye === 'OD' ? 'Right eye' : 'Left eye';
    const until =
      cover.until === null ? `${cover.months} months from surgery` : `until ${formatDay(cover.until)}`;
    pdf.paragraph(
      `${eye}: ${cover.label}, ${until}. ${cover.conditions.join('; ')}. Outside it ${currency} ${formatAmount(cover.priceOutOfCoverMinor, currency)} an eye.`,
    );
  }
}
