import type { FeeTerms } from '#domain/fees/index';
import { currencyCode, minor } from '#domain/money/index';
import { addDays, type ClinicDate, type Instant, instantAt, msOf, weekday } from '#domain/time/index';
import type { AppDeps } from '#server/app';
import { sealEverything } from '#server/features/audit/index';
import { pullPayouts } from '#server/features/bank/index';
import { createDraft, putInForce } from '#server/features/catalogue/index';
import { closeSiteDay, countDayComplete, enterBatch } from '#server/features/closing/index';
import { agreeSurgeonFee } from '#server/features/fees/index';
import {
  closeTillShift,
  countTillCash,
  expectedCash,
  openTillShift,
  tillSessionsOfDay,
} from '#server/features/tills/index';
import type { SteppedClock } from '#server/platform/clock';
import { rawRows, readMinor } from '#server/platform/db';
import { cashCountOf } from './cash-count.ts';
import { type DemoClinic, type DemoSite, seedClinic, ZONE } from './clinic.ts';
import { DEMO_PATIENTS } from './patients.ts';
import { demoCostBook, demoPriceBook } from './price-book.ts';
import {
  acceptAndPayDeposit,
  doEyes,
  type PayAsPayer,
  payBalance,
  takeUpAndQuote,
  visit,
  type Walker,
} from './walk.ts';

/** The stand-in's side of the demonstration: its clock walks with ours. */
export interface DemoProcessor {
  setClock(at: Instant): Promise<void>;
  readonly pay: PayAsPayer;
}

const DAYS_OF_HISTORY = 20;
const FLOAT = minor(20_000);

/** The working day a number of working days from another; weekends do not count. */
export function workday(anchor: ClinicDate, n: number): ClinicDate {
  let day = anchor;
  for (let left = Math.abs(n); left > 0; ) {
    day = addDays(day, n < 0 ? -1 : 1);
    if (weekday(day) <= 5) left -= 1;
  }
  return day;
}

/** The first start's working day: today, or the Friday before a weekend. */
export function anchorFor(today: ClinicDate): ClinicDate {
  return weekday(today) <= 5 ? today : addDays(today, 5 - weekday(today));
}

/**
 * Four lively weeks of an invented clinic, made through the same use cases the screens call, so that every figure ties.
 * Ends on the anchor's morning, at `now` at the latest.
 */
export async function seedDemo(
  deps: AppDeps & { readonly clock: SteppedClock },
  processor: DemoProcessor,
  options: { readonly anchor: ClinicDate; readonly now: Instant; readonly password: string },
): Promise<void> {
  const { anchor } = options;
  const first = workday(anchor, -DAYS_OF_HISTORY);
  const story = new Story(deps, processor, anchor, options.now);
  await story.at(first, '08:00');
  const clinic = await seedClinic(deps, first, options.password);
  await seedRules(deps, clinic, first);
  const walkers: Walker[] = [];
  for (let n = -DAYS_OF_HISTORY; n < 0; n += 1) await liveDay(story, clinic, walkers, n);
  await liveMorning(story, clinic, walkers);
  await sealEverything(deps);
}

/** Time as the story tells it; both clocks move together and never past the end. */
class Story {
  readonly deps: AppDeps & { readonly clock: SteppedClock };
  readonly processor: DemoProcessor;
  readonly anchor: ClinicDate;
  readonly #end: Instant;

  constructor(
    deps: AppDeps & { readonly clock: SteppedClock },
    processor: DemoProcessor,
    anchor: ClinicDate,
    end: Instant,
  ) {
    this.deps = deps;
    this.processor = processor;
    this.anchor = anchor;
    this.#end = end;
  }

  day(n: number): ClinicDate {
    return n === 0 ? this.anchor : workday(this.anchor, n);
  }

  async at(day: ClinicDate, time: string): Promise<void> {
    const wanted = instantAt(day, time, ZONE);
    const at = msOf(wanted) > msOf(this.#end) ? this.#end : wanted;
    this.deps.clock.set(at);
    await this.processor.setClock(at);
  }
}

async function seedRules(deps: AppDeps, clinic: DemoClinic, day: ClinicDate): Promise<void> {
  const { manager } = clinic.people;
  const bookId = await createDraft(
    deps,
    { siteId: null, file: { book: demoPriceBook, costs: demoCostBook } },
    manager,
  );
  const [row] = await rawRows<{ content_hash: string }>(
    deps.db,
    'SELECT content_hash FROM price_books WHERE price_book_id = ?',
    [bookId],
  );
  await putInForce(deps, bookId, { contentHash: row?.content_hash ?? '', inForceOn: day }, manager);
  for (const [surgeon, lenticule, other] of [
    ['surgeon', 45_000, 40_000],
    ['surgeon2', 42_000, 38_000],
  ] as const) {
    const terms: FeeTerms = {
      currency: currencyCode('EUR'),
      basis: {
        kind: 'per_eye',
        byProcedure: {
          'lenticule-extraction': minor(lenticule),
          lasik: minor(other),
          'surface-ablation': minor(other),
        },
      },
      enhancement: { kind: 'per_eye', amountMinor: minor(22_500) },
      trigger: 'done_and_collected',
      monthlyCapMinor: null,
      guarantee: null,
      sharedCare: null,
      withholding: [],
    };
    await agreeSurgeonFee(deps, {
      surgeonUserId: clinic.people[surgeon].userId,
      effectiveOn: day,
      terms,
      agreedBy: manager.userId,
      actor: manager,
    });
  }
}

/** One whole working day at both sites, from the floats to the close by two people. */
async function liveDay(story: Story, clinic: DemoClinic, walkers: Walker[], n: number): Promise<void> {
  const { deps } = story;
  const day = story.day(n);
  await story.at(day, '08:40');
  for (const site of sitesOf(clinic))
    await openTillShift(deps, first(site.tillIds), FLOAT, clinic.people.desk);
  await story.at(day, '09:30');
  for (const patient of DEMO_PATIENTS.filter((each) => each.quotedOn === n)) {
    const second = patient.secondOn === undefined ? null : story.day(patient.secondOn);
    walkers.push(
      await takeUpAndQuote(deps, clinic, patient, {
        surgery: story.day(patient.surgeryOn),
        second,
        today: day,
      }),
    );
  }
  await story.at(day, '11:15');
  for (const walker of walkers.filter((each) => each.patient.acceptedOn === n))
    await acceptAndPayDeposit(deps, walker, story.processor.pay);
  await story.at(day, '13:05');
  for (const walker of walkers.filter((each) => each.patient.balanceOn === n))
    await payBalance(deps, clinic, walker);
  await story.at(day, '14:30');
  for (const walker of walkers.filter((each) => each.patient.surgeryOn === n))
    await doEyes(deps, clinic, walker, day);
  await story.at(day, '15:40');
  for (const walker of walkers.filter(
    (each) => [1, 5].includes(n - each.patient.surgeryOn) && each.courseId !== null,
  ))
    await visit(deps, clinic, walker, day);
  await story.at(day, '17:20');
  await pullPayouts(deps);
  for (const site of sitesOf(clinic)) await closeEvening(story, clinic, site, day);
}

async function closeEvening(
  story: Story,
  clinic: DemoClinic,
  site: DemoSite,
  day: ClinicDate,
): Promise<void> {
  const { deps } = story;
  const { desk, desk2 } = clinic.people;
  for (const session of await tillSessionsOfDay(deps.db, site.siteId, day)) {
    const { amountMinor } = await expectedCash(deps.db, session);
    await countTillCash(deps, session.tillSessionId, cashCountOf(amountMinor), desk);
    await closeTillShift(deps, session.tillSessionId, FLOAT, desk2);
  }
  const [terminal] = await rawRows<{ n: number; total: unknown }>(
    deps.db,
    `SELECT COUNT(*) AS n, SUM(t.amount_minor) AS total FROM receipt_tenders t JOIN receipts r ON r.receipt_id = t.receipt_id
     LEFT JOIN receipt_voids v ON v.receipt_id = r.receipt_id
     WHERE v.receipt_id IS NULL AND r.site_id = ? AND r.booked_on = ? AND t.tender = 'card_machine'`,
    [site.siteId, day],
  );
  if (terminal && terminal.n > 0) {
    const batchNo = `${site.code}-${day.slice(5).replace('-', '')}`;
    await enterBatch(
      deps,
      { siteId: site.siteId, day },
      { batchNo, amountMinor: readMinor(terminal.total), slips: terminal.n },
      desk,
    );
  }
  await sealEverything(deps);
  await countDayComplete(deps, { siteId: site.siteId, day }, desk);
  await closeSiteDay(deps, { siteId: site.siteId, day }, desk2);
}

/** The anchor's morning: tills open, a patient has just paid online, the day's surgery is still to come. */
async function liveMorning(story: Story, clinic: DemoClinic, walkers: readonly Walker[]): Promise<void> {
  const { deps } = story;
  await story.at(story.anchor, '08:40');
  for (const site of sitesOf(clinic))
    await openTillShift(deps, first(site.tillIds), FLOAT, clinic.people.desk);
  const late = walkers.find((walker) => walker.patient.name[1] === 'Brook');
  await story.at(story.anchor, '09:05');
  if (late) await acceptAndPayDeposit(deps, late, story.processor.pay);
  await pullPayouts(deps);
}

function sitesOf(clinic: DemoClinic): DemoSite[] {
  return [clinic.sites.LQ, clinic.sites.MR];
}

function first(tillIds: readonly number[]): number {
  const [tillId] = tillIds;
  if (tillId === undefined) throw new Error('A site without a till');
  return tillId;
}
