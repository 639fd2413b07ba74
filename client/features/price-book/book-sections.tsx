import type { PriceBookView } from '#contract/catalogue';
import { AddOns, Bands, Procedures, SecondEye } from './book-prices.tsx';
import { Aftercare, Ladder, Packages, Paying, Reductions, TaxAndTerms } from './book-terms.tsx';

/** A version to be read from top to bottom: every rule, with what it costs the clinic for those who may see it. */
export function BookSections({ view }: { readonly view: PriceBookView }) {
  const { book, costs } = view;
  return (
    <>
      <Procedures book={book} costs={costs} />
      <Bands book={book} />
      <SecondEye book={book} />
      <AddOns book={book} costs={costs} />
      <Aftercare book={book} />
      <Packages book={book} />
      <Reductions book={book} />
      <Paying book={book} />
      <Ladder book={book} />
      <TaxAndTerms book={book} />
    </>
  );
}
