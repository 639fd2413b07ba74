import { exportJournalCsv, exportJournalText, getTrialBalance, listEntries } from '#contract/ledger';
import { accountOf, journalText } from '#domain/ledger/index';
import { currencyCode, greatest, negate, plainAmount, sum, ZERO } from '#domain/money/index';
import { dayOf } from '#domain/time/index';
import { type BoundRoute, route } from '#server/http/route';
import type { StaffActor } from '#server/platform/actor';
import { csvText } from '#server/platform/csv';
import { type Db, rawRows } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import { inSnapshot } from '#server/platform/transaction';
import { accountTotals } from './balances.ts';
import { readJournal, readJournalEntries } from './journal-read.ts';

export function ledgerRoutes(deps: Deps): BoundRoute[] {
  return [
    route(listEntries, async ({ query, actor }) => {
      const { limit, siteId, ...filter } = query;
      return await readJournal(deps.db, { ...filter, siteIds: sitesOf(actor, siteId) }, limit);
    }),
    route(getTrialBalance, async ({ query, actor }) => {
      const asOf = query.asOf ?? dayOf(deps.clock.now(), 'UTC');
      const totals = await accountTotals(deps.db, sitesOf(actor, query.siteId), asOf);
      const rows = totals.map(({ account, currency, totalMinor }) => ({
        account,
        name: accountOf(account)?.name ?? account,
        kind: accountOf(account)?.kind ?? ('equity' as const),
        currency,
        debitMinor: greatest(totalMinor, ZERO),
        creditMinor: greatest(negate(totalMinor), ZERO),
      }));
      return {
        asOf,
        rows,
        debitMinor: sum(rows.map((row) => row.debitMinor)),
        creditMinor: sum(rows.map((row) => row.creditMinor)),
      };
    }),
    route(exportJournalText, async ({ query, actor }) => {
      const { siteId, ...days } = query;
      const text = await inSnapshot(deps.db, async (trx) =>
        journalText(
          await readJournalEntries(trx, { ...days, siteIds: sitesOf(actor, siteId) }),
          await clinicCurrency(trx),
        ),
      );
      return { bytes: Buffer.from(text, 'utf8'), filename: 'tenderlight.journal' };
    }),
    route(exportJournalCsv, async ({ query, actor }) => {
      const { siteId, ...days } = query;
      const entries = await inSnapshot(deps.db, (trx) =>
        readJournalEntries(trx, { ...days, siteIds: sitesOf(actor, siteId) }),
      );
      const rows = entries.flatMap((entry) =>
        entry.lines.map((line) => [
          entry.entryId,
          entry.bookedOn,
          entry.occurredOn,
          entry.kind,
          entry.memo,
          line.account,
          accountOf(line.account)?.name ?? '',
          plainAmount(line.amountMinor, entry.currency),
          entry.currency,
          line.courseId ?? null,
          line.eye ?? null,
          line.tillId ?? null,
          line.payeeId ?? null,
        ]),
      );
      const head = [
        'entry',
        'booked on',
        'occurred on',
        'kind',
        'memo',
        'account',
        'name',
        'amount',
        'currency',
        'course',
        'eye',
        'till',
        'payee',
      ];
      return { bytes: Buffer.from(csvText([head, ...rows]), 'utf8'), filename: 'journal.csv' };
    }),
  ];
}

/** One site if it is named and theirs, else every site the person works at. */
function sitesOf(actor: StaffActor, siteId: number | undefined): readonly number[] {
  if (siteId === undefined) return actor.siteIds;
  if (!actor.siteIds.includes(siteId)) throw notFound('site');
  return [siteId];
}

async function clinicCurrency(trx: Db) {
  const [clinic] = await rawRows<{ currency: string }>(
    trx,
    'SELECT currency FROM clinics ORDER BY clinic_id LIMIT 1',
  );
  return currencyCode(clinic?.currency ?? 'EUR');
}
