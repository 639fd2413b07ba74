import { readFile } from 'node:fs/promises';
import { parseArgs } from 'node:util';
import type { z } from 'zod';
import { courseInputSchema, priceBookSchema } from '#contract/pricing';
import { parsePrescription } from '#domain/prescription/index';
import { quoteCourse, validatePriceBook } from '#domain/pricing/index';

/**
 * Prices a course without the server:
 *   node --conditions=source --import tsx server/price-command.ts --book book.json --course course.json
 * Prints the priced course as JSON. Exit 2 with the refusals as JSON when it cannot be priced, 1 when a file cannot
 * be read. In the course a prescription may be written as people write it: "-2.50/-1.25x90".
 */

interface Problem {
  readonly file: 'book' | 'course';
  readonly field: string;
  readonly words: string;
  readonly change: string;
}

type Answer = { readonly exit: 0 | 1 | 2; readonly output: unknown };

/** What the command prints and how it ends; the caller reads the files. */
export function priceFiles(bookText: string, courseText: string): Answer {
  const book = read('book', bookText, priceBookSchema);
  const course = read('course', courseText, courseInputSchema);
  if (!book.ok || !course.ok) {
    const problems = [...(book.ok ? [] : book.problems), ...(course.ok ? [] : course.problems)];
    return { exit: 2, output: { refusals: problems } };
  }
  const errors = validatePriceBook(book.value).filter(({ severity }) => severity === 'error');
  if (errors.length > 0) {
    const refusals = errors.map(
      ({ field, words, change }): Problem => ({ file: 'book', field, words, change }),
    );
    return { exit: 2, output: { refusals } };
  }
  const result = quoteCourse(course.value, book.value);
  if (result.ok) return { exit: 0, output: result.course };
  return {
    exit: 2,
    output: { refusals: result.refusals.map((refusal) => ({ file: 'course', ...refusal })) },
  };
}

type Read<Value> =
  | { readonly ok: true; readonly value: Value }
  | { readonly ok: false; readonly problems: readonly Problem[] };

function read<Value>(file: Problem['file'], text: string, schema: z.ZodType<Value>): Read<Value> {
  let json: unknown;
  const problems: Problem[] = [];
  try {
    json = JSON.parse(text, (key, value) => (key === 'prescription' ? typed(value, problems) : value));
  } catch (error) {
    const words = error instanceof SyntaxError ? `The ${file} is not JSON: ${error.message}` : String(error);
    return { ok: false, problems: [{ file, field: '', words, change: 'Correct the file.' }] };
  }
  if (problems.length > 0) return { ok: false, problems };
  const parsed = schema.safeParse(json);
  if (parsed.success) return { ok: true, value: parsed.data };
  const found = parsed.error.issues.map(
    ({ path, message }): Problem => ({
      file,
      field: path.join('.'),
      words: message,
      change: `Correct this field of the ${file}.`,
    }),
  );
  return { ok: false, problems: found };
}

/** A prescription written on one line becomes its powers. */
function typed(value: unknown, problems: Problem[]): unknown {
  if (typeof value !== 'string') return value;
  const prescription = parsePrescription(value);
  if (prescription.ok) return prescription.prescription;
  for (const { field, words, change } of prescription.refusals) {
    problems.push({ file: 'course', field: `prescription.${field}`, words: `${value}: ${words}`, change });
  }
  return null;
}

async function main(): Promise<number> {
  const { values } = parseArgs({ options: { book: { type: 'string' }, course: { type: 'string' } } });
  if (!values.book || !values.course) {
    process.stderr.write('Say which files: --book book.json --course course.json\n');
    return 1;
  }
  const [book, course] = await Promise.all([readFile(values.book, 'utf8'), readFile(values.course, 'utf8')]);
  const { exit, output } = priceFiles(book, course);
  process.stdout.write(`${JSON.stringify(output, null, 2)}\n`);
  return exit;
}

if (process.argv[1]?.includes('price-command')) {
  try {
    process.exitCode = await main();
  } catch (error) {
    process.stderr.write(`${error instanceof Error ? error.message : String(error)}\n`);
    process.exitCode = 1;
  }
}
