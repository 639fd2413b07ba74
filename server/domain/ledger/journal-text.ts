import { type CurrencyCode, decimalsOf, type Minor } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { type AccountKind, accountOf, CHART } from './chart.ts';
import type { EntryDraft, EntryLine } from './entry.ts';

/** An entry as it stands in the journal. */
export interface JournalEntry extends EntryDraft {
  readonly entryId: number;
  readonly bookedOn: ClinicDate;
  /** The entry this one corrects. */
  readonly correctsEntryId?: number;
}

const ROOT: Readonly<Record<AccountKind, { readonly name: string; readonly type: string }>> = {
  asset: { name: 'Assets', type: 'A' },
  liability: { name: 'Liabilities', type: 'L' },
  equity: { name: 'Equity', type: 'E' },
  income: { name: 'Income', type: 'R' },
  expense: { name: 'Expenses', type: 'X' },
};

/** What a line tells besides account and amount, as tags in its comment. */
const TAGS = ['course', 'eye', 'obligation', 'kind', 'occurred', 'corrects'] as const;

/** Name of an account in plain-text journals: "Assets:1000 Bank"; tills and payees are accounts beneath: "Assets:1010 Till:3". */
export function journalAccount(line: Pick<EntryLine, 'account' | 'tillId' | 'payeeId'>): string {
  const account = accountOf(line.account);
  if (!account) throw new RangeError(`The chart has no account ${line.account}`);
  const name = `${ROOT[account.kind].name}:${account.code} ${account.name}`;
  if (account.needs.includes('till')) return `${name}:${line.tillId}`;
  if (account.needs.includes('payee')) return `${name}:${line.payeeId}`;
  return name;
}

/**
 * The journal as plain text that hledger reads, strict checks included: booked days, entry numbers as codes, every
 * account, commodity and tag declared. Entries stand in the order given.
 * @throws RangeError when an entry is in another currency or on an account the chart does not have
 */
export function journalText(entries: Iterable<JournalEntry>, currency: CurrencyCode): string {
  const used = new Set<string>(
    CHART.filter(isWhole).map((account) => journalAccount({ account: account.code })),
  );
  const blocks: string[] = [];
  for (const entry of entries) {
    if (entry.currency !== currency) {
      throw new RangeError(`Entry ${entry.entryId} is in ${entry.currency}, the journal in ${currency}`);
    }
    for (const line of entry.lines) used.add(journalAccount(line));
    blocks.push(entryText(entry));
  }
  const head = [
    `commodity ${decimalsOf(currency) === 0 ? '1000.' : `1000.${'0'.repeat(decimalsOf(currency))}`} ${currency}`,
    ...[...used].sort().map((name) => `account ${name}  ; type:${typeOf(name)}`),
    ...TAGS.map((tag) => `tag ${tag}`),
  ];
  return `${[head.join('\n'), ...blocks].join('\n\n')}\n`;
}

function isWhole(account: (typeof CHART)[number]): boolean {
  return !account.needs.includes('till') && !account.needs.includes('payee');
}

function typeOf(name: string): string {
  return Object.values(ROOT).find((root) => name.startsWith(`${root.name}:`))?.type ?? '';
}

function entryText(entry: JournalEntry): string {
  const tags = [
    `kind:${entry.kind}`,
    ...(entry.occurredOn === entry.bookedOn ? [] : [`occurred:${entry.occurredOn}`]),
    ...(entry.correctsEntryId === undefined ? [] : [`corrects:${entry.correctsEntryId}`]),
  ];
  const lines = entry.lines.map((line) => {
    const amount = plainAmount(line.amountMinor, entry.currency).padStart(18);
    const about = [
      ...(line.courseId === undefined ? [] : [`course:${line.courseId}`]),
      ...(line.eye === undefined ? [] : [`eye:${line.eye}`]),
      ...(line.obligationId === undefined ? [] : [`obligation:${line.obligationId}`]),
    ];
    const comment = about.length === 0 ? '' : `  ; ${about.join(', ')}`;
    return `    ${journalAccount(line).padEnd(44)}  ${amount} ${entry.currency}${comment}`;
  });
  return [`${entry.bookedOn} (${entry.entryId}) ${oneLine(entry.memo)}  ; ${tags.join(', ')}`, ...lines].join(
    '\n',
  );
}

/** Words that cannot end the line, begin a comment or split payee from note. */
function oneLine(memo: string): string {
  return memo
    .replace(/[\p{Cc}\p{Zl}\p{Zp}]+/gu, ' ')
    .replaceAll(';', ',')
    .replaceAll('|', '/')
    .trim();
}

function plainAmount(amount: Minor, currency: CurrencyCode): string {
  const decimals = decimalsOf(currency);
  const digits = String(Math.abs(amount)).padStart(decimals + 1, '0');
  const sign = amount < 0 ? '-' : '';
  if (decimals === 0) return `${sign}${digits}`;
  return `${sign}${digits.slice(0, -decimals)}.${digits.slice(-decimals)}`;
}
