import {
  CYLINDER_LIMIT_MD,
  formatDioptres,
  POWER_STEP_MD,
  SPHERE_LIMIT_MD,
} from '#domain/prescription/index';
import { bandHolds } from './compile.ts';
import type { Find } from './finding.ts';
import type { Band, PriceBook } from './price-book.ts';

const LIMITS_MD = { meridian: SPHERE_LIMIT_MD + CYLINDER_LIMIT_MD, cylinder: CYLINDER_LIMIT_MD } as const;
const NAMES = { meridian: 'strongest meridian', cylinder: 'cylinder' } as const;

/** Bands that hold nothing, overlap, leave a hole or end: looked at for every power that can be prescribed. */
export function validateBands(book: PriceBook, find: Find): void {
  for (const [index, band] of book.bands.entries()) {
    if (sizesOf(band).length > 0) continue;
    find(
      'empty_band',
      `bands.${index}.toMd`,
      band.id,
      `The band "${band.label}" holds no power that can be prescribed.`,
      'Move its edges apart, or let them belong to it.',
    );
  }
  for (const procedure of book.procedures) {
    for (const measure of ['meridian', 'cylinder'] as const) {
      const bands = book.bands.filter(
        (band) => band.measure === measure && band.procedureIds.includes(procedure.id),
      );
      if (bands.length > 0) validateTable(book, procedure.label, measure, bands, find);
    }
  }
}

function validateTable(
  book: PriceBook,
  procedure: string,
  measure: Band['measure'],
  bands: readonly Band[],
  find: Find,
): void {
  const held = bands.map(sizesOf);
  const all = held.flat();
  const firstIndex = bands[0] ? book.bands.indexOf(bands[0]) : 0;
  const lowest = Math.min(...all);
  const highest = Math.max(...all);
  for (const [index, band] of bands.entries()) {
    for (let later = index + 1; later < bands.length; later += 1) {
      const both = (held[index] ?? []).filter((size) => held[later]?.includes(size));
      const other = bands[later];
      if (both.length === 0 || !other) continue;
      find(
        'overlapping_bands',
        `bands.${book.bands.indexOf(other)}.fromMd`,
        other.id,
        `For ${procedure}, "${band.label}" and "${other.label}" both hold a ${NAMES[measure]} of ${range(both)}.`,
        'Move an edge, or say which of the two it belongs to.',
      );
    }
  }
  const missing = sizes(lowest, highest).filter((size) => !all.includes(size));
  if (missing.length > 0) {
    find(
      'gap_between_bands',
      `bands.${firstIndex}`,
      bands[0]?.id ?? null,
      `For ${procedure}, no band holds a ${NAMES[measure]} of ${range(missing)}.`,
      'Widen a band, or add one at no charge.',
    );
  }
  if (highest < LIMITS_MD[measure]) {
    find(
      'bands_end',
      `bands.${firstIndex}`,
      bands[0]?.id ?? null,
      `${procedure} cannot be quoted for a ${NAMES[measure]} over ${formatDioptres(highest)} D.`,
      'Leave it so, or add a band without an upper edge.',
      'notice',
    );
  }
}

function sizesOf(band: Band): number[] {
  return sizes(0, LIMITS_MD[band.measure]).filter((size) => bandHolds(band, size));
}

function sizes(fromMd: number, toMd: number): number[] {
  const found: number[] = [];
  for (let size = fromMd; size <= toMd; size += POWER_STEP_MD) found.push(size);
  return found;
}

function range(found: readonly number[]): string {
  const first = formatDioptres(Math.min(...found));
  const last = formatDioptres(Math.max(...found));
  return first === last ? `${first} D` : `${first} to ${last} D`;
}
