import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { currencyCode, minor } from '#domain/money/index';
import { clinicDate, instant } from '#domain/time/index';
import { HousePdf } from '#server/features/documents/render/house-pdf';
import { letterText, quoteMail } from '#server/features/documents/render/mails';
import { type ReceiptModel, renderReceipt } from '#server/features/documents/render/receipt';

const RECEIPT: ReceiptModel = {
  clinic: { name: 'Test Clinic', address: '1 Test Street' },
  number: 'T-26-00881',
  occurredOn: clinicDate('2026-03-12'),
  recordedAt: instant('2026-03-12T10:42:00Z'),
  payerName: 'Ludmiła Żak',
  patientName: 'Łucja Żak',
  courseNumber: 'T-C-26-0377',
  currency: currencyCode('EUR'),
  tenders: [
    { words: 'Card machine', amountMinor: minor(123_450), reference: 'slip 4711' },
    { words: 'Cash', amountMinor: minor(50_000), reference: null },
  ],
  changeMinor: minor(1_050),
  roundingMinor: minor(0),
  totalMinor: minor(172_400),
  creditMinor: minor(0),
  leftMinor: minor(99),
  takenBy: 'Piet Sorrel',
  voided: false,
};

function withPdf<T>(bytes: Buffer, look: (file: string) => T): T {
  const folder = mkdtempSync(path.join(tmpdir(), 'tl-pdf-'));
  const file = path.join(folder, 'it.pdf');
  writeFileSync(file, bytes);
  try {
    return look(file);
  } finally {
    rmSync(folder, { recursive: true });
  }
}

const run = (program: string, ...args: string[]): string => execFileSync(program, args, { encoding: 'utf8' });

describe('a receipt’s paper', () => {
  test('the same rows · give the same bytes, other rows others', async () => {
    const once = await renderReceipt(RECEIPT);
    expect((await renderReceipt(RECEIPT)).equals(once)).toBe(true);
    expect((await renderReceipt({ ...RECEIPT, leftMinor: minor(98) })).equals(once)).toBe(false);
  });

  test.each(['A5', 'slip'] as const)(
    '%s · holds every figure as selectable text, other letters than English too',
    async (size) => {
      const text = withPdf(await renderReceipt(RECEIPT, size), (file) =>
        run('pdftotext', '-layout', file, '-'),
      );
      for (const words of [
        'T-26-00881',
        '1,724.00',
        '1,234.50',
        '500.00',
        '−10.50',
        '0.99',
        'slip 4711',
        'Ludmiła Żak',
      ])
        expect(text).toContain(words);
    },
  );

  test('it is tagged, titled and brings its fonts (pdfinfo, pdffonts)', async () => {
    const [info, fonts] = withPdf(await renderReceipt(RECEIPT), (file) => [
      run('pdfinfo', file),
      run('pdffonts', file),
    ]);
    expect(info).toMatch(/Tagged:\s+yes/);
    expect(info).toMatch(/Title:\s+Receipt T-26-00881/);
    const rows = fonts.trim().split('\n').slice(2);
    expect(rows.length).toBeGreaterThan(0);
    expect(rows.every((row) => row.includes('Manrope') && / yes yes /.test(row))).toBe(true);
  });
});

test('a long table · goes on over pages, with its head on each', async () => {
  const pdf = new HousePdf({
    title: 'Long',
    size: 'A4',
    at: instant('2026-03-12T10:42:00Z'),
    footer: 'foot',
  });
  const rows = Array.from({ length: 120 }, (_each, index) => [`row ${index + 1}`, `${index}.00`]);
  pdf.table(
    [
      { head: 'the head', width: 0.6 },
      { head: 'EUR', width: 0.4, align: 'right' },
    ],
    rows,
  );
  const text = withPdf(await pdf.end(), (file) => run('pdftotext', '-layout', file, '-'));
  const pages = text.split('\f').filter((page) => page.trim() !== '');
  expect(pages.length).toBeGreaterThan(2);
  expect(pages.every((page) => page.includes('the head'))).toBe(true);
  for (const [words] of rows) expect(text).toContain(words);
});

describe('mails', () => {
  test('what people typed · is escaped in HTML', () => {
    const mail = letterText({ subject: 's', paragraphs: ['<b>&"\'</b>'], sign: 'x' });
    expect(mail.html).toContain('&lt;b&gt;&amp;&quot;&#39;&lt;/b&gt;');
    expect(mail.html).not.toContain('<b>');
  });
  test('a quote’s mail · holds the link, loads nothing, and says nothing clinical in its subject', () => {
    const mail = quoteMail({
      givenName: 'Mara',
      clinic: 'Test Clinic',
      number: 'T-1',
      validUntil: clinicDate('2026-04-10'),
      linkUrl: 'https://clinic.example/q/secret',
    });
    expect(mail.text).toContain('https://clinic.example/q/secret');
    expect(mail.html).not.toMatch(/<img|src=/);
    expect(mail.subject).not.toMatch(/eye|surgery|laser|lens/i);
  });
});
