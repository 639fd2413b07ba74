/** Something a manager should know about a book before it comes into force. */
export interface BookFinding {
  /** A book with errors cannot come into force; a notice only asks for a second look. */
  readonly severity: 'error' | 'notice';
  readonly code: BookFindingCode;
  /** Path into the book, such as "bands.3.fromMd". */
  readonly field: string;
  readonly ruleId: string | null;
  readonly words: string;
  readonly change: string;
}

export type BookFindingCode =
  | 'no_procedure'
  | 'duplicate_id'
  | 'unknown_reference'
  | 'bad_amount'
  | 'bad_rate'
  | 'bad_number'
  | 'empty_band'
  | 'overlapping_bands'
  | 'gap_between_bands'
  | 'bands_end'
  | 'add_on_not_per_eye'
  | 'second_eye_without_fallback'
  | 'second_eye_without_reduction'
  | 'second_eye_twice'
  | 'second_eye_missing'
  | 'cover_without_price_after'
  | 'cover_months'
  | 'tax_without_rate'
  | 'tax_rate_twice'
  | 'exempt_without_reason'
  | 'package_without_saving'
  | 'limits_reversed'
  | 'deposit_limits_reversed'
  | 'ladder_order'
  | 'ladder_end'
  | 'ladder_kept_falls';

/** Collects findings; errors unless said otherwise. */
export type Find = (
  code: BookFindingCode,
  field: string,
  ruleId: string | null,
  words: string,
  change: string,
  severity?: BookFinding['severity'],
) => void;
