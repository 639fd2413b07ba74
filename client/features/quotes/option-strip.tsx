import { Link, useSearchParams } from 'react-router-dom';
import { moneyText } from '#client/ui/money.tsx';
import type { PriceBook, QuoteResult } from '#domain/pricing/index';
import { type OptionDraft, optionLetter, optionWords } from '#domain/quotes/index';

/** Which option the address asks for, from 0. */
export function useChosenOption(count: number): number {
  const [search] = useSearchParams();
  const asked = (search.get('option') ?? 'A').charCodeAt(0) - 65;
  return Math.min(Math.max(asked, 0), Math.max(count - 1, 0));
}

export interface StripOption {
  readonly words: string;
  /** Its total as it stands in the strip, undefined while it cannot be priced. */
  readonly total: string | undefined;
}

/** What the strip shows of drafts and their prices. */
export function stripOptions(
  options: readonly OptionDraft[],
  results: readonly QuoteResult[],
  book: PriceBook,
): StripOption[] {
  return options.map((option, index) => {
    const result = results[index];
    return {
      words: optionWords(option, book),
      total: result?.ok ? moneyText(result.course.totalMinor, result.course.currency) : undefined,
    };
  });
}

/** The options side by side, each with what it comes to; the one being looked at is the current tab. One alone has no strip. */
export function OptionStrip({
  options,
  chosen,
}: {
  readonly options: readonly StripOption[];
  readonly chosen: number;
}) {
  const [search] = useSearchParams();
  const to = (index: number): string => {
    const next = new URLSearchParams(search);
    next.set('option', optionLetter(index));
    next.delete('why');
    return `?${next.toString()}`;
  };
  if (options.length < 2) return null;
  return (
    <nav aria-label="Options" className="mt-4 flex flex-wrap items-stretch border-b border-ink">
      {options.map((option, index) => (
        <Link
          key={optionLetter(index)}
          to={to(index)}
          replace
          aria-current={index === chosen ? 'true' : undefined}
          className={`-mb-px min-h-12 px-4 py-2 no-underline ${index === chosen ? 'border border-b-0 border-ink bg-sheet text-ink' : 'border border-transparent border-b-0 text-soft'}`}
        >
          <span className="block text-small font-semibold">
            Option {optionLetter(index)}, {option.words.replace(/^./, (letter) => letter.toLowerCase())}
          </span>
          <span className="tabular font-extrabold">{option.total ?? 'not priced yet'}</span>
        </Link>
      ))}
    </nav>
  );
}
