import type { Refusal } from '#domain/pricing/index';

/** What is wrong with one option, looked up by the engine's field names. */
export interface FieldErrors {
  /** The first refusal of a field, in one sentence with what to change. */
  at(...fields: readonly string[]): string | undefined;
  /** Refusals of no field that is on the sheet. */
  rest(shown: readonly string[]): readonly string[];
}

export function fieldErrors(refusals: readonly Refusal[]): FieldErrors {
  const words = (refusal: Refusal) => `${refusal.words} ${refusal.change}`;
  return {
    at: (...fields) => {
      const found = refusals.find((refusal) => fields.includes(refusal.field));
      return found ? words(found) : undefined;
    },
    rest: (shown) =>
      refusals.filter((refusal) => !shown.some((field) => refusal.field.startsWith(field))).map(words),
  };
}
