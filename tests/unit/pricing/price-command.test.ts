import { execFile } from 'node:child_process';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { describe, expect, test } from 'vitest';
import { costBookSchema, courseInputSchema, priceBookSchema } from '#contract/pricing';
import { quoteCourse } from '#domain/pricing/index';
import { demoCostBook, demoPriceBook } from '#seeds/price-book';
import { priceFiles } from '#server/price-command';
import { courseInput } from '#tests/factories/courses';
import { goldenBook } from '#tests/factories/golden-book';

const BOOK = JSON.stringify(goldenBook);
const typed = (right: unknown) => {
  const input = courseInput();
  return JSON.stringify({ ...input, eyes: { ...input.eyes, OD: { ...input.eyes.OD, prescription: right } } });
};

/** Exit code and fields of the refusals. */
function answer(book: string, course: string): [number, string[]] {
  const { exit, output } = priceFiles(book, course);
  const { refusals = [] } = output as { refusals?: { file: string; field: string }[] };
  return [exit, refusals.map(({ file, field }) => `${file} ${field}`)];
}

describe('pricing without the server', () => {
  test('a book and a course · the very course the engine gives', () => {
    const result = quoteCourse(courseInput(), goldenBook);
    expect(priceFiles(BOOK, JSON.stringify(courseInput()))).toEqual({
      exit: 0,
      output: result.ok ? result.course : null,
    });
  });
  test('a prescription as people write it · is the same course', () => {
    const asPowers = priceFiles(
      BOOK,
      typed({ sphereMd: -2_000, cylinderMd: -1_500, axisDeg: 75, vertexMm: 12 }),
    );
    expect(priceFiles(BOOK, typed('-2.00/-1.50x75'))).toEqual(asPowers);
    expect(asPowers.exit).toBe(0);
  });
  test('refused by the engine, by the book or by the shape · exit 2 and the field', () => {
    expect(answer(BOOK, typed('-2.00 -1.50'))).toEqual([2, ['course prescription.axis']]);
    expect(answer(BOOK, JSON.stringify(courseInput({ packageId: 'none' })))).toEqual([
      2,
      ['course packageId'],
    ]);
    expect(answer(BOOK, JSON.stringify({ ...courseInput(), quotedOn: '2026-02-30' }))).toEqual([
      2,
      ['course quotedOn'],
    ]);
    expect(answer('{', JSON.stringify(courseInput()))).toEqual([2, ['book ']]);
    const overlapping = {
      ...goldenBook,
      bands: goldenBook.bands.map((band) => ({ ...band, toIncluded: true })),
    };
    expect(answer(JSON.stringify(overlapping), JSON.stringify(courseInput()))[0]).toBe(2);
  });
  test('as a command · prints JSON and ends with its code', async () => {
    const folder = await mkdtemp(join(tmpdir(), 'tenderlight-price-'));
    try {
      await writeFile(join(folder, 'book.json'), BOOK);
      await writeFile(join(folder, 'course.json'), typed('-3.00'));
      const files = ['--book', join(folder, 'book.json'), '--course', join(folder, 'course.json')];
      const node = ['--conditions=source', '--import', 'tsx', 'server/price-command.ts'];
      const { stdout } = await promisify(execFile)(process.execPath, [...node, ...files]);
      expect(JSON.parse(stdout)).toMatchObject({ totalMinor: 404_000, currency: 'EUR' });
      await writeFile(join(folder, 'course.json'), typed('-3.10'));
      await expect(promisify(execFile)(process.execPath, [...node, ...files])).rejects.toMatchObject({
        code: 2,
      });
    } finally {
      await rm(folder, { recursive: true });
    }
  });
});

test('the published shapes · hold the books and inputs we use, and nothing unnamed', () => {
  for (const book of [goldenBook, demoPriceBook]) expect(priceBookSchema.parse(book)).toEqual(book);
  expect(costBookSchema.parse(demoCostBook)).toEqual(demoCostBook);
  expect(courseInputSchema.parse(courseInput())).toEqual(courseInput());
  expect(priceBookSchema.safeParse({ ...goldenBook, costs: demoCostBook }).success).toBe(false);
});
