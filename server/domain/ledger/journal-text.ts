import { type CurrencyCode, type Minor, plainAmount } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { type AccountKind, accountOf } from './chart.ts';

/** A posted entry as the export needs it. */
export interface JournalEntryRow {
  readonly entryId: number;
  readonly bookedOn: ClinicDate;
  readonly occurredOn: ClinicDate;
  readonly kind: string;
  readonly memo: string;
  readonly site: string;
  readonly currency: CurrencyCode;
  readonly lines: readonly {
    readonly account: string;
    readonly amountMinor: Minor;
    readonly course?: string | null;
    readonly till?: string | null;
    readonly payee?: string | null;
  }[];
}

const TOP: Readonly<Record<AccountKind, string>> = {
  asset: 'assets',
  liability: 'liabilities',
  equity: 'equity',
  income: 'income',
  expense: 'expenses',
};

/** The hierarchical account name of plain-text accounting: "assets:1010 Till". */
export function journalAccountName(code: string): string {
  const account = accountOf(code);
  return account ? `${TOP[account.kind]}:${code} ${account.name}` : `equity:${code}`;
}

/**
 * One entry in the plain-text journal format that hledger reads. booked_on is the date, occurred_on the secondary date;
 * dimensions are tags. Semicolons and line ends of memos are taken out, for they would begin a comment.
 */
export function journalText(entry: JournalEntryRow): string {
  const head = `${entry.bookedOn}=${entry.occurredOn} (${entry.entryId}) ${plain(entry.memo)}  ; kind:${entry.kind}, site:${plain(entry.site)}`;
  const lines = entry.lines.map((line) => {
    const tags = [
      line.course ? `course:${plain(line.course)}` : '',
      line.till ? `till:${plain(line.till)}` : '',
      line.payee ? `payee:${plain(line.payee)}` : '',
    ].filter((tag) => tag !== '');
    const amount = `${plainAmount(line.amountMinor, entry.currency)} ${entry.currency}`;
    return `    ${journalAccountName(line.account)}  ${amount}${tags.length > 0 ? `  ; ${tags.join(', ')}` : ''}`;
  });
  return `${head}\n${lines.join('\n')}\n`;
}

function plain(text: string): string {
  return text.replace(/[;,\n\r|]+/g, ' ').trim();
}
