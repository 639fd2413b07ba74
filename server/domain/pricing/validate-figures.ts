import type { Find } from './finding.ts';
import type { PriceBook } from './price-book.ts';

/** Smallest and largest of the whole numbers that are neither money nor rates. */
const RANGES: Readonly<Record<string, readonly [number, number]>> = {
  balanceDueDays: [0, 365],
  validityDays: [1, 365],
  reflectionDays: [0, 365],
  minDaysBefore: [0, 730],
  freeMoves: [0, 100],
  withinDays: [1, 3_650],
  afterDays: [0, 3_650],
  windowDays: [0, 365],
  months: [1, 600],
  earliestMonth: [0, 600],
  countPerEye: [1, 100],
  examinationEveryMonths: [1, 600],
  instalments: [1, 120],
  thresholdMd: [0, 30_000],
  fromMd: [0, 42_000],
  toMd: [0, 42_000],
};

/** Every figure of the book is a whole number in its range: money not below zero, rates from nothing to all. */
export function validateFigures(book: PriceBook, find: Find): void {
  walk(book, '', null, (path, key, value, ruleId) => {
    const at = value === null ? 'nothing' : String(value);
    if (key.endsWith('Minor') || path.includes('.rule.prices.')) {
      if (isWhole(value, 0, 9_000_000_000_000)) return;
      find(
        'bad_amount',
        path,
        ruleId,
        `${at} is no amount of money.`,
        'Give whole minor units, zero or more.',
      );
    } else if (key.endsWith('Bp')) {
      if (isWhole(value, 0, 10_000)) return;
      find('bad_rate', path, ruleId, `${at} is no rate.`, 'Give basis points from 0 to 10,000 (100 %).');
    } else {
      const range = RANGES[key];
      if (!range || isWhole(value, range[0], range[1])) return;
      find(
        'bad_number',
        path,
        ruleId,
        `${at} is not possible here.`,
        `Give a whole number from ${range[0]} to ${range[1]}.`,
      );
    }
  });
}

function isWhole(value: unknown, least: number, most: number): boolean {
  return value === null || (Number.isSafeInteger(value) && Number(value) >= least && Number(value) <= most);
}

type Visit = (path: string, key: string, value: unknown, ruleId: string | null) => void;

/** Visits every leaf with the id of the rule it stands in. */
function walk(value: unknown, path: string, ruleId: string | null, visit: Visit): void {
  if (typeof value !== 'object' || value === null) return;
  const record = value as Readonly<Record<string, unknown>>;
  const own = typeof record.id === 'string' && path !== '' ? record.id : ruleId;
  for (const [key, child] of Object.entries(record)) {
    const below = path === '' ? key : `${path}.${key}`;
    if (typeof child === 'object' && child !== null) walk(child, below, own, visit);
    else visit(below, key, child, own);
  }
}
