import { createHash } from 'node:crypto';
import { Engine } from 'json-rules-engine';
import { minor } from '#domain/money/index';
import {
  type Band,
  type CourseInput,
  compilePriceBook,
  contentKey,
  type PriceBook,
  quoteCourse,
} from '#domain/pricing/index';
import { courseInput, eye, SURGERY_ON, staged } from '#tests/factories/courses';
import { goldenBook } from '#tests/factories/golden-book';

/**
 * How fast a course of three options is priced while somebody types, held against json-rules-engine (npm) evaluating
 * the rules of the same book once for one eye. Prints rates a second, ratios and the 95th percentile; asserts nothing.
 */

/** The golden book with as many cylinder bands, a hundredth of a dioptre wide, as bring it to a number of rules. */
function bookOf(rules: number): PriceBook {
  const bands = Array.from({ length: rules }, (_, index): Band => {
    const wide = 12_000 / rules;
    return {
      id: `band-${index}`,
      label: `Band ${index}`,
      measure: 'cylinder',
      procedureIds: ['lasik', 'surface', 'lenticule'],
      fromMd: Math.round(index * wide),
      fromIncluded: true,
      toMd: index === rules - 1 ? null : Math.round((index + 1) * wide),
      toIncluded: false,
      charge: { kind: 'amount', amountMinor: minor(index * 10) },
      requiresAddOnIds: [],
    };
  });
  return { ...goldenBook, bands };
}

function engineOf(book: PriceBook): Engine {
  const engine = new Engine();
  for (const band of book.bands) {
    engine.addRule({
      conditions: {
        all: [
          { fact: 'procedure', operator: 'in', value: band.procedureIds },
          { fact: 'cylinder', operator: 'greaterThanInclusive', value: band.fromMd },
          { fact: 'cylinder', operator: 'lessThan', value: band.toMd ?? 99_000 },
        ],
      },
      event: { type: 'band', params: { id: band.id } },
    });
  }
  return engine;
}

const eyes: CourseInput['eyes'] = {
  OD: eye('lasik -2.00 -1.50 x 75', 'c24'),
  OS: eye('surface -2.75 -0.50 x 110', 'c24'),
};
const OPTIONS: readonly CourseInput[] = [
  courseInput({ eyes }),
  courseInput({ eyes, packageId: 'all-in', addOns: [{ addOnId: 'drops', laterality: 'OU' }] }),
  courseInput({ eyes, surgery: staged(30), priceListId: 'staff', paymentPlanId: 'ten' }),
];

function times(
  run: () => unknown,
  milliseconds = 2_000,
): { readonly perSecond: number; readonly p95Us: number } {
  for (let warm = 0; warm < 3_000; warm += 1) run();
  const taken: number[] = [];
  const start = performance.now();
  while (performance.now() - start < milliseconds) {
    const before = performance.now();
    run();
    taken.push(performance.now() - before);
  }
  return figures(taken);
}

async function timesAsync(run: () => Promise<unknown>, milliseconds = 2_000) {
  for (let warm = 0; warm < 50; warm += 1) await run();
  const taken: number[] = [];
  const start = performance.now();
  while (performance.now() - start < milliseconds) {
    const before = performance.now();
    await run();
    taken.push(performance.now() - before);
  }
  return figures(taken);
}

function figures(taken: number[]) {
  const sum = taken.reduce((total, each) => total + each, 0);
  const sorted = taken.sort((a, b) => a - b);
  return {
    perSecond: taken.length / (sum / 1_000),
    p95Us: (sorted[Math.floor(taken.length * 0.95)] ?? 0) * 1_000,
  };
}

function priceAll(book: ReturnType<typeof compilePriceBook>) {
  return OPTIONS.map((input) => {
    const result = quoteCourse(input, book);
    if (!result.ok) throw new Error(JSON.stringify(result.refusals));
    return result.course;
  });
}

function frozen(book: ReturnType<typeof compilePriceBook>): string {
  const courses = priceAll(book);
  const hash = createHash('sha256');
  for (const input of OPTIONS) hash.update(contentKey(input, book.book));
  return JSON.stringify(courses) + hash.digest('hex');
}

function say(what: string, { perSecond, p95Us }: { perSecond: number; p95Us: number }, than?: number): void {
  const ratio = than === undefined ? '' : `, ${(perSecond / than).toFixed(1)} times`;
  process.stdout.write(`${what}: ${Math.round(perSecond)} a second, p95 ${p95Us.toFixed(0)} µs${ratio}\n`);
}

const books = [10, 100, 1_000].map(bookOf);
const [ten, hundred, thousand] = books.map(compilePriceBook);
if (!ten || !hundred || !thousand) throw new Error('No books');
const theirs = engineOf(hundred.book);
const facts = { procedure: 'lasik', cylinder: 1_500 };
const base = await timesAsync(() => theirs.run(facts));
say(`json-rules-engine, 100 rules once (surgery on ${SURGERY_ON})`, base);
say(
  'three options, 100 rules',
  times(() => priceAll(hundred)),
  base.perSecond,
);
say(
  'three options, serialised and hashed, 100 rules',
  times(() => frozen(hundred)),
  base.perSecond,
);
const small = times(() => priceAll(ten));
say('three options, 10 rules', small);
const large = times(() => priceAll(thousand));
say('three options, 1,000 rules', large);
process.stdout.write(`1,000 rules cost ${(small.perSecond / large.perSecond).toFixed(2)} times 10 rules\n`);
