import type { TillView } from '#contract/tills';
import { ACCOUNT } from '#domain/ledger/index';
import { denominationsOf, tillDifference } from '#domain/tills/index';
import type { ClinicDate } from '#domain/time/index';
import { todayAt } from '#server/features/business-days/index';
import { tillBalance } from '#server/features/ledger/index';
import type { Db } from '#server/platform/db';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import {
  currencyOf,
  expectedCash,
  type TillSessionRow,
  tillMovementsOf,
  tillSessionOf,
  tillSessionsOfDay,
  tillsOf,
} from './till-repository.ts';

type SessionView = TillView['sessions'][number];

/** One shift as the desk sees it: what it should hold stays hidden until it is counted. */
export async function readTillSession(db: Db, session: TillSessionRow, userId: number): Promise<SessionView> {
  const expected = session.state === 'open' ? null : await expectedCash(db, session);
  const { countedMinor } = session;
  return {
    tillSessionId: session.tillSessionId,
    dayOn: session.dayOn,
    state: session.state,
    floatMinor: session.floatMinor,
    openedBy: session.openedBy,
    openedAt: session.openedAt,
    movements: await tillMovementsOf(db, session.tillSessionId),
    shouldHoldMinor: expected?.amountMinor ?? null,
    shouldHoldWhy: expected?.why ?? null,
    countedMinor,
    differenceMinor:
      expected && countedMinor !== null ? tillDifference(countedMinor, expected.amountMinor) : null,
    differenceReason: session.differenceReason,
    countedBy: session.countedBy,
    countedByMe: session.countedById === userId,
    closedBy: session.closedBy,
  };
}

/** A shift by its key, after something was done to it. */
export async function readTillSessionById(
  db: Db,
  tillSessionId: number,
  userId: number,
): Promise<SessionView> {
  const session = await tillSessionOf(db, tillSessionId);
  if (!session) throw notFound('till');
  return await readTillSession(db, session, userId);
}

/** The tills of a site with their shifts of a day. */
export async function readTills(
  deps: Pick<Deps, 'db' | 'clock'>,
  siteId: number,
  day: ClinicDate | undefined,
  userId: number,
) {
  const { db } = deps;
  const on = day ?? (await todayAt(db, deps, siteId));
  const currency = await currencyOf(db);
  const sessions = await tillSessionsOfDay(db, siteId, on);
  const tills: TillView[] = [];
  for (const till of await tillsOf(db, siteId)) {
    const own = sessions.filter((session) => session.tillId === till.tillId);
    const views = [];
    for (const session of own) views.push(await readTillSession(db, session, userId));
    const open = own.some((session) => session.state !== 'closed');
    tills.push({
      ...till,
      holdsMinor: open ? null : await tillBalance(db, till.tillId, ACCOUNT.till),
      sessions: views,
    });
  }
  return { currency, day: on, denominations: denominationsOf(currency), tills };
}
