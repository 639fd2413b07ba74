import { createRequire } from 'node:module';
import PDFDocument from 'pdfkit';
import { type CurrencyCode, formatAmount, type Minor } from '#domain/money/index';
import type { Instant } from '#domain/time/index';

const require = createRequire(import.meta.url);
const FONTS = {
  regular: require.resolve('@expo-google-fonts/manrope/400Regular/Manrope_400Regular.ttf'),
  semibold: require.resolve('@expo-google-fonts/manrope/600SemiBold/Manrope_600SemiBold.ttf'),
  heavy: require.resolve('@expo-google-fonts/manrope/800ExtraBold/Manrope_800ExtraBold.ttf'),
};

/** The light column of the house's colours; paper prints white. */
const INK = '#17222b';
const SOFT = '#55626b';
const RULE = '#d8d2c4';

export interface HousePdfOptions {
  readonly title: string;
  readonly size: 'A4' | 'A5' | 'slip';
  /** Fixes the creation date: the same model gives the same bytes. */
  readonly at: Instant;
  readonly footer: string;
}

export interface TableColumn {
  readonly head: string;
  /** Share of the width. */
  readonly width: number;
  readonly align?: 'left' | 'right';
}

type Font = keyof typeof FONTS;
type Doc = InstanceType<typeof PDFDocument>;

/** 80 mm of paper, as long as it needs to be. */
const SLIP_WIDTH = 226.77;

/** A page of the house: Manrope, ruled rows, tagged for readers that cannot see it. */
export class HousePdf {
  readonly #doc: Doc;
  readonly #options: HousePdfOptions;
  readonly #bytes: Promise<Buffer>;
  readonly #root: ReturnType<Doc['struct']>;

  constructor(options: HousePdfOptions) {
    this.#options = options;
    const slip = options.size === 'slip';
    const margin = slip ? 14 : options.size === 'A5' ? 36 : 50;
    this.#doc = new PDFDocument({
      size: slip ? [SLIP_WIDTH, 620] : options.size,
      margins: { top: margin, left: margin, right: margin, bottom: slip ? 14 : margin + 24 },
      info: {
        Title: options.title,
        Producer: 'Tenderlight',
        Creator: 'Tenderlight',
        CreationDate: new Date(options.at),
      },
      tagged: true,
      lang: 'en',
      displayTitle: true,
      subset: 'PDF/UA',
      pdfVersion: '1.7',
      bufferPages: true,
    } as unknown as ConstructorParameters<typeof PDFDocument>[0]);
    for (const [name, file] of Object.entries(FONTS)) this.#doc.registerFont(name, file);
    this.#bytes = collect(this.#doc);
    this.#root = this.#doc.struct('Document');
    this.#doc.addStructure(this.#root);
  }

  /** Height of a row, tighter on a slip. */
  get #row(): number {
    return this.#options.size === 'slip' ? 15 : 20;
  }

  get #left(): number {
    return this.#doc.page.margins.left;
  }

  get #width(): number {
    return this.#doc.page.width - this.#doc.page.margins.left - this.#doc.page.margins.right;
  }

  heading(text: string, level: 1 | 2 = 1): void {
    const size =
      level === 1 ? (this.#options.size === 'slip' ? 13 : 20) : this.#options.size === 'slip' ? 10 : 13;
    if (level === 2) this.gap(10);
    this.#room(60);
    this.#tagged(level === 1 ? 'H1' : 'H2', () =>
      this.#font('heavy', size).text(text, this.#left, this.#doc.y, { width: this.#width }),
    );
    this.gap(4);
  }

  paragraph(text: string, tone: 'plain' | 'soft' | 'strong' = 'plain'): void {
    const size = this.#options.size === 'slip' ? 8 : 9.5;
    this.#tagged('P', () => {
      this.#font(tone === 'strong' ? 'semibold' : 'regular', size, tone === 'soft' ? SOFT : INK);
      this.#doc.text(text, this.#left, this.#doc.y, { width: this.#width, lineGap: 2 });
    });
    this.gap(2);
  }

  /** The one big figure of the page. */
  figure(amount: Minor, currency: CurrencyCode, words: string): void {
    this.#tagged('P', () => {
      this.#font('heavy', this.#options.size === 'slip' ? 18 : 26).text(
        `${currency} ${formatAmount(amount, currency)}`,
        this.#left,
        this.#doc.y,
        { width: this.#width, features: ['tnum'] },
      );
    });
    if (words !== '') this.paragraph(words, 'soft');
  }

  gap(points: number): void {
    this.#doc.y += points;
  }

  /** Label left, value right, a rule under it; the strong one closes a sum. */
  pair(label: string, value: string, strong = false): void {
    this.table(
      [
        { head: '', width: 0.5 },
        { head: '', width: 0.5, align: 'right' },
      ],
      [[label, value]],
      { strongRows: strong ? [0] : [], bare: true },
    );
  }

  /** A ruled table; heads come again on a new page. */
  table(
    columns: readonly TableColumn[],
    rows: readonly (readonly string[])[],
    options: { readonly strongRows?: readonly number[]; readonly bare?: boolean } = {},
  ): void {
    const table = this.#doc.struct('Table');
    this.#root.add(table);
    if (!options.bare)
      this.#tableRow(
        table,
        columns,
        columns.map((column) => column.head),
        'head',
      );
    rows.forEach((row, index) => {
      const broke = this.#room(this.#rowHeight(columns, row, 'regular') + 6);
      if (broke && !options.bare)
        this.#tableRow(
          table,
          columns,
          columns.map((column) => column.head),
          'head',
        );
      this.#tableRow(table, columns, row, options.strongRows?.includes(index) ? 'strong' : 'plain');
    });
    table.end();
  }

  /** Ends the document: page numbers and foot on every page. */
  async end(): Promise<Buffer> {
    const { start, count } = this.#doc.bufferedPageRange();
    for (let page = start; page < start + count; page += 1) {
      this.#doc.switchToPage(page);
      if (this.#options.size === 'slip') continue;
      const pages = count > 1 ? ` · page ${page - start + 1} of ${count}` : '';
      const bottom = this.#doc.page.margins.bottom;
      this.#doc.page.margins.bottom = 0;
      this.#doc.markContent('Artifact');
      this.#font('regular', 7.5, SOFT).text(
        `${this.#options.footer}${pages}`,
        this.#left,
        this.#doc.page.height - bottom + 4,
        { width: this.#width, lineBreak: true },
      );
      this.#doc.endMarkedContent();
      this.#doc.page.margins.bottom = bottom;
    }
    this.#root.end();
    this.#doc.end();
    return await this.#bytes;
  }

  #font(font: Font, size: number, colour = INK): Doc {
    return this.#doc.font(font).fontSize(size).fillColor(colour);
  }

  #tagged(type: string, draw: () => void): void {
    const element = this.#doc.struct(type, {}, draw);
    this.#root.add(element);
    element.end();
  }

  /** Makes sure so much room is left; true when a new page was begun. */
  #room(points: number): boolean {
    if (this.#doc.y + points <= this.#doc.page.height - this.#doc.page.margins.bottom) return false;
    this.#doc.addPage();
    return true;
  }

  #rowHeight(columns: readonly TableColumn[], cells: readonly string[], font: Font): number {
    this.#font(font, this.#size());
    const heights = columns.map((column, index) =>
      this.#doc.heightOfString(cells[index] ?? '', {
        width: this.#width * column.width - 6,
        features: ['tnum'],
      }),
    );
    return Math.max(this.#row, Math.max(...heights) + 8);
  }

  #size(): number {
    return this.#options.size === 'slip' ? 8 : 9.5;
  }

  #tableRow(
    table: ReturnType<Doc['struct']>,
    columns: readonly TableColumn[],
    cells: readonly string[],
    kind: 'head' | 'plain' | 'strong',
  ): void {
    const font: Font = kind === 'plain' ? 'regular' : 'semibold';
    const height = this.#rowHeight(columns, cells, font);
    const top = this.#doc.y;
    const row = this.#doc.struct('TR');
    table.add(row);
    let x = this.#left;
    columns.forEach((column, index) => {
      const width = this.#width * column.width;
      const cell = this.#doc.struct(kind === 'head' ? 'TH' : 'TD', {}, () => {
        this.#font(font, kind === 'head' ? this.#size() - 1 : this.#size(), kind === 'head' ? SOFT : INK);
        this.#doc.text(cells[index] ?? '', x, top + 5, {
          width: width - 6,
          align: column.align ?? 'left',
          features: ['tnum'],
        });
      });
      row.add(cell);
      cell.end();
      x += width;
    });
    row.end();
    const heavy = kind !== 'plain';
    this.#doc.markContent('Artifact');
    this.#doc
      .moveTo(this.#left, top + height)
      .lineTo(this.#left + this.#width, top + height)
      .lineWidth(heavy ? 1.1 : 0.5)
      .strokeColor(heavy ? INK : RULE)
      .stroke();
    this.#doc.endMarkedContent();
    this.#doc.x = this.#left;
    this.#doc.y = top + height;
  }
}

function collect(doc: Doc): Promise<Buffer> {
  return new Promise((resolve, reject) => {
    const chunks: Buffer[] = [];
    doc.on('data', (chunk: Buffer) => chunks.push(chunk));
    doc.on('end', () => resolve(Buffer.concat(chunks)));
    doc.on('error', reject);
  });
}
