import { EYES, type Eye } from '#domain/eye';
import { applyRate, type Minor, subtract, ZERO } from '#domain/money/index';
import {
  formatDioptres,
  minusForm,
  type Prescription,
  sphericalEquivalentMd,
} from '#domain/prescription/index';
import { addMonths, type ClinicDate, formatDay } from '#domain/time/index';
import { coverOf } from './aftercare.ts';
import type { WantedCourse } from './check-input.ts';
import type { CoverTerms } from './course.ts';
import type { EnhancementCover } from './price-book.ts';

/** The cover each eye gets, in the order of the chart. */
export function coverTerms(wanted: WantedCourse): CoverTerms[] {
  const terms: CoverTerms[] = [];
  for (const side of EYES) {
    const eye = wanted.eyes.find((each) => each.eye === side);
    const cover = eye ? coverOf(wanted, eye) : null;
    if (eye && cover) terms.push(termsOf(cover, side, eye.on));
  }
  return terms;
}

function termsOf(cover: EnhancementCover, eye: Eye, surgeryOn: ClinicDate | null): CoverTerms {
  return {
    eye,
    coverId: cover.id,
    label: cover.label,
    months: cover.months,
    earliestMonth: cover.earliestMonth,
    from: surgeryOn && addMonths(surgeryOn, cover.earliestMonth),
    until: surgeryOn && addMonths(surgeryOn, cover.months),
    count: cover.countPerEye,
    thresholdMd: cover.thresholdMd,
    thresholdOf: cover.thresholdOf,
    examinationEveryMonths: cover.examinationEveryMonths,
    priceOutOfCoverMinor: cover.priceOutOfCoverMinor ?? ZERO,
    conditions: conditionWords(cover),
  };
}

const THRESHOLD_WORDS = {
  spherical_equivalent: 'a spherical equivalent',
  cylinder: 'a cylinder',
  either: 'a spherical equivalent or a cylinder',
} as const;

function conditionWords(cover: EnhancementCover): string[] {
  const words = [
    `${cover.countPerEye === 1 ? 'one enhancement' : `${cover.countPerEye} enhancements`} per eye`,
    `not before month ${cover.earliestMonth}, until month ${cover.months} after surgery`,
    `from ${THRESHOLD_WORDS[cover.thresholdOf]} of ${formatDioptres(cover.thresholdMd)} D`,
  ];
  if (cover.examinationEveryMonths !== null) {
    words.push(`an examination at least every ${cover.examinationEveryMonths} months`);
  }
  return words;
}

/** An enhancement somebody asks for. Whether to operate is the surgeon's decision; this answers who pays. */
export interface EnhancementAsked {
  readonly askedOn: ClinicDate;
  readonly surgeryOn: ClinicDate;
  /** What the eye measures now. */
  readonly residual: Prescription;
  /** Enhancements of this eye already done under the cover. */
  readonly used: number;
  readonly examinedOn: readonly ClinicDate[];
  /** Rate that a carried-over discount takes off the price out of cover, basis points; 0 for none. */
  readonly carriedRateBp: number;
}

/** One condition of the cover, what it asks and what was found. */
export interface CoverCondition {
  readonly condition: 'not_before' | 'not_after' | 'count' | 'threshold' | 'examinations';
  readonly asks: string;
  readonly found: string;
  readonly met: boolean;
}

export interface EnhancementPrice {
  readonly underCover: boolean;
  readonly conditions: readonly CoverCondition[];
  /** Nothing under cover, else the price of the cover's rule. */
  readonly priceMinor: Minor;
}

/**
 * Whether an enhancement is included, every condition shown, and what it costs.
 *
 * @throws RangeError when the cover has no price out of cover (a book in force always has one)
 */
export function priceEnhancement(cover: EnhancementCover, asked: EnhancementAsked): EnhancementPrice {
  const conditions = [
    ...timeConditions(cover, asked),
    countCondition(cover, asked),
    thresholdCondition(cover, asked),
    ...examinationCondition(cover, asked),
  ];
  const underCover = conditions.every(({ met }) => met);
  if (underCover) return { underCover, conditions, priceMinor: ZERO };
  if (cover.priceOutOfCoverMinor === null)
    throw new RangeError(`Cover ${cover.id} has no price out of cover`);
  const price = cover.priceOutOfCoverMinor;
  const priceMinor = cover.carriesDiscount ? subtract(price, applyRate(price, asked.carriedRateBp)) : price;
  return { underCover, conditions, priceMinor };
}

function timeConditions(cover: EnhancementCover, { askedOn, surgeryOn }: EnhancementAsked): CoverCondition[] {
  const from = addMonths(surgeryOn, cover.earliestMonth);
  const until = addMonths(surgeryOn, cover.months);
  const found = formatDay(askedOn);
  return [
    { condition: 'not_before', asks: `not before ${formatDay(from)}`, found, met: askedOn >= from },
    { condition: 'not_after', asks: `until ${formatDay(until)}`, found, met: askedOn <= until },
  ];
}

function countCondition(cover: EnhancementCover, { used }: EnhancementAsked): CoverCondition {
  const { countPerEye } = cover;
  return {
    condition: 'count',
    asks: `at most ${countPerEye}`,
    found: `${used} used`,
    met: used < countPerEye,
  };
}

function thresholdCondition(cover: EnhancementCover, { residual }: EnhancementAsked): CoverCondition {
  const equivalent = Math.abs(sphericalEquivalentMd(residual));
  const cylinder = Math.abs(minusForm(residual).cylinderMd);
  const reached = {
    spherical_equivalent: equivalent >= cover.thresholdMd,
    cylinder: cylinder >= cover.thresholdMd,
    either: equivalent >= cover.thresholdMd || cylinder >= cover.thresholdMd,
  };
  return {
    condition: 'threshold',
    asks: `${THRESHOLD_WORDS[cover.thresholdOf]} of ${formatDioptres(cover.thresholdMd)} D or more`,
    found: `spherical equivalent ${formatDioptres(equivalent)} D, cylinder ${formatDioptres(cylinder)} D`,
    met: reached[cover.thresholdOf],
  };
}

/** No gap between surgery, the examinations and the asking may be longer than the cover allows. */
function examinationCondition(cover: EnhancementCover, asked: EnhancementAsked): CoverCondition[] {
  const every = cover.examinationEveryMonths;
  if (every === null) return [];
  const inTime = asked.examinedOn.filter((on) => on >= asked.surgeryOn && on <= asked.askedOn).sort();
  const days = [asked.surgeryOn, ...inTime, asked.askedOn];
  const late = days.find((on, index) => {
    const next = days[index + 1];
    return next !== undefined && next > addMonths(on, every);
  });
  return [
    {
      condition: 'examinations',
      asks: `an examination at least every ${every} months`,
      found: late ? `none in the ${every} months after ${formatDay(late)}` : `${inTime.length} in time`,
      met: late === undefined,
    },
  ];
}
