import type { DayView } from '#contract/closing';
import { minor, sum, ZERO } from '#domain/money/index';
import { dayExceptions, mayClose } from '#domain/tills/index';
import type { ClinicDate, Instant } from '#domain/time/index';
import { tillsOf } from '#server/features/tills/index';
import { type Db, rawRows, type Trx } from '#server/platform/db';
import { notFound } from '#server/platform/problem';
import { type DayPicture, dayPicture } from './day-facts.ts';

interface DayRow {
  site_name: string;
  state: 'open' | 'counted' | 'closed' | null;
  counted_by: number | null;
  counted_by_name: string | null;
  last_closed: ClinicDate | null;
}

/** A site's day as the screen shows it. */
export async function readDay(
  trx: Db | Trx,
  siteId: number,
  day: ClinicDate,
  userId: number,
): Promise<DayView> {
  const [row] = await rawRows<DayRow>(
    trx,
    `SELECT s.name AS site_name, d.state, d.counted_by, u.name AS counted_by_name,
            (SELECT MAX(x.day_on) FROM business_days x WHERE x.site_id = s.site_id AND x.state = 'closed' AND x.day_on < ?) AS last_closed
     FROM sites s LEFT JOIN business_days d ON d.site_id = s.site_id AND d.day_on = ? LEFT JOIN users u ON u.user_id = d.counted_by
     WHERE s.site_id = ?`,
    [day, day, siteId],
  );
  if (!row) throw notFound('site');
  const picture = await dayPicture(trx, siteId, day);
  const exceptions = dayExceptions(picture.facts);
  return {
    siteId,
    siteName: row.site_name,
    day,
    currency: picture.currency,
    state: row.state ?? 'not_opened',
    receiptCount: picture.receiptCount,
    lastClosed: row.last_closed,
    tills: await tillRows(trx, siteId, picture),
    takings: picture.takings.map((taking) => ({
      ...taking,
      differenceMinor: taking.proofMinor === null ? null : minor(taking.proofMinor - taking.receiptsMinor),
    })),
    togetherMinor: sum(picture.takings.map((taking) => taking.receiptsMinor)),
    differenceMinor: differenceOf(picture),
    exceptions: exceptions.map(({ code, blocking, words, amountMinor }) => ({
      code,
      blocking,
      words,
      amountMinor,
    })),
    mayClose: mayClose(exceptions) && row.state !== 'closed' && row.state !== null,
    countedBy: row.counted_by_name,
    countedByMe: row.counted_by === userId,
    closes: await closesOf(trx, siteId, day),
  };
}

/** What the day is off by: the takings against their proofs, cash by its tills. */
export function differenceOf(picture: DayPicture): DayView['differenceMinor'] {
  return sum(
    picture.takings.map((taking) =>
      taking.proofMinor === null ? ZERO : minor(taking.proofMinor - taking.receiptsMinor),
    ),
  );
}

async function tillRows(trx: Db | Trx, siteId: number, picture: DayPicture): Promise<DayView['tills']> {
  const tills = await tillsOf(trx, siteId);
  return tills.flatMap((till): DayView['tills'] => {
    const own = picture.tills.filter(({ session }) => session.tillId === till.tillId);
    if (own.length === 0) {
      const nothing = { shouldHoldMinor: null, shouldHoldWhy: null, holdsMinor: null, differenceMinor: null };
      return [
        {
          tillId: till.tillId,
          tillSessionId: null,
          name: till.name,
          state: 'not_opened',
          ...nothing,
          reason: null,
          countedBy: null,
          closedBy: null,
        },
      ];
    }
    return own.map(({ session, shouldHoldMinor, shouldHoldWhy, differenceMinor }, index) => ({
      tillId: till.tillId,
      tillSessionId: session.tillSessionId,
      name: own.length === 1 ? till.name : `${till.name}, shift ${index + 1}`,
      state: session.state,
      shouldHoldMinor,
      shouldHoldWhy,
      holdsMinor: session.countedMinor,
      differenceMinor,
      reason: session.differenceReason,
      countedBy: session.countedBy,
      closedBy: session.closedBy,
    }));
  });
}

async function closesOf(trx: Db | Trx, siteId: number, day: ClinicDate): Promise<DayView['closes']> {
  const rows = await rawRows<{
    day_close_id: number;
    version_no: number;
    asked: string;
    closed: string;
    closed_at: Instant;
  }>(
    trx,
    `SELECT c.day_close_id, c.version_no, a.name AS asked, b.name AS closed, c.closed_at FROM day_closes c
     JOIN users a ON a.user_id = c.asked_by JOIN users b ON b.user_id = c.closed_by
     WHERE c.site_id = ? AND c.day_on = ? ORDER BY c.version_no DESC`,
    [siteId, day],
  );
  return rows.map((row) => ({
    dayCloseId: row.day_close_id,
    versionNo: row.version_no,
    askedBy: row.asked,
    closedBy: row.closed,
    closedAt: row.closed_at,
  }));
}
