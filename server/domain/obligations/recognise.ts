import { type Minor, minor, subtract, ZERO } from '#domain/money/index';
import type { ClinicDate } from '#domain/time/index';
import { allocateByStandAlone } from './allocate.ts';

/** Policy A: everything is earned at each eye's surgery. Policy B: every promise earns its relative stand-alone part. */
export type RecognitionPolicy = 'A' | 'B';

/**
 * The price shared out to the promises by the clinic's policy. Policy A gives everything to surgery, by the surgeries'
 * stand-alone prices; a course without surgery is shared out as by policy B.
 */
export function allocateByPolicy(
  policy: RecognitionPolicy,
  priceMinor: Minor,
  promises: readonly { readonly kind: string; readonly standAloneMinor: Minor }[],
): Minor[] {
  const surgeryOnly = policy === 'A' && promises.some(({ kind }) => kind === 'surgery');
  return allocateByStandAlone(
    priceMinor,
    promises.map(({ kind, standAloneMinor }) => (surgeryOnly && kind !== 'surgery' ? ZERO : standAloneMinor)),
  );
}

/** A part of a promise as the books have it. */
export interface PromisePart {
  readonly id: string;
  readonly standAloneMinor: Minor;
  readonly allocatedMinor: Minor;
  /** null while not delivered and not expired. */
  readonly recognisedOn: ClinicDate | null;
}

export interface RecognitionRefusal {
  readonly id: string;
  readonly code: 'unknown_promise' | 'recognised_before';
}

export type Recognition =
  | {
      readonly ok: true;
      readonly amounts: readonly { readonly id: string; readonly amountMinor: Minor }[];
    }
  | { readonly ok: false; readonly refusals: readonly RecognitionRefusal[] };

/** What delivering promises earns: each part's allocated amount, once (invariants 6 and 11). */
export function recognise(parts: readonly PromisePart[], delivered: readonly string[]): Recognition {
  const found = [...new Set(delivered)].map((id) => ({ id, part: parts.find((part) => part.id === id) }));
  const refusals = found.flatMap(({ id, part }): RecognitionRefusal[] => {
    if (!part) return [{ id, code: 'unknown_promise' }];
    return part.recognisedOn === null ? [] : [{ id, code: 'recognised_before' }];
  });
  if (refusals.length > 0) return { ok: false, refusals };
  return {
    ok: true,
    amounts: found.map(({ id, part }) => ({ id, amountMinor: part?.allocatedMinor ?? ZERO })),
  };
}

/** Promised and not yet earned. */
export function unrecognised(parts: readonly PromisePart[]): Minor {
  return parts
    .filter(({ recognisedOn }) => recognisedOn === null)
    .reduce((total, { allocatedMinor }) => minor(total + allocatedMinor), ZERO);
}

/** How a change of the contract is read: 21(a) prospectively, or 21(b) as a cumulative catch-up. */
export type ChangeReading = 'prospective' | 'catch_up';

/** The course after a change: the promises that stand, those delivered among them, at their stand-alone prices. */
export interface ChangedContract {
  /** Price of the whole changed contract, what was recognised before included. */
  readonly priceMinor: Minor;
  readonly parts: readonly PromisePart[];
}

export interface Reallocation {
  /** New amounts of the parts, in order; what is delivered keeps its own in the prospective reading. */
  readonly allocated: readonly Minor[];
  /** What the delivered parts earn more (or, below zero, less) at once; zero in the prospective reading. */
  readonly catchUpMinor: Minor;
}

export type ReallocationResult =
  | ({ readonly ok: true } & Reallocation)
  | { readonly ok: false; readonly code: 'nothing_left_to_deliver' | 'less_than_recognised' };

/**
 * Allocates a changed contract anew.
 * prospective (IFRS 15.21(a), the remaining promises being distinct): what is not yet recognised goes to what is left, by
 * stand-alone price; nothing recognised moves.
 * catch_up (21(b)): the whole price is allocated over all parts as if it had always been so; what the delivered ones have
 * earned too much or too little is the catch-up.
 */
export function reallocate(reading: ChangeReading, contract: ChangedContract): ReallocationResult {
  return reading === 'prospective' ? prospective(contract) : catchUp(contract);
}

function prospective({ priceMinor, parts }: ChangedContract): ReallocationResult {
  const recognised = parts.reduce(
    (total, part) => (part.recognisedOn === null ? total : total + part.allocatedMinor),
    0,
  );
  const left = subtract(priceMinor, minor(recognised));
  if (left < 0) return { ok: false, code: 'less_than_recognised' };
  const open = parts.filter(({ recognisedOn }) => recognisedOn === null);
  if (open.length === 0 && left > 0) return { ok: false, code: 'nothing_left_to_deliver' };
  const shares =
    open.length === 0
      ? []
      : allocateByStandAlone(
          left,
          open.map((part) => part.standAloneMinor),
        );
  let next = 0;
  const allocated = parts.map((part) => {
    if (part.recognisedOn !== null) return part.allocatedMinor;
    next += 1;
    return shares[next - 1] ?? ZERO;
  });
  return { ok: true, allocated, catchUpMinor: ZERO };
}

function catchUp({ priceMinor, parts }: ChangedContract): ReallocationResult {
  if (parts.length === 0) return { ok: false, code: 'nothing_left_to_deliver' };
  const allocated = allocateByStandAlone(
    priceMinor,
    parts.map((part) => part.standAloneMinor),
  );
  const catchUpMinor = parts.reduce(
    (total, part, index) =>
      part.recognisedOn === null ? total : total + (allocated[index] ?? ZERO) - part.allocatedMinor,
    0,
  );
  return { ok: true, allocated, catchUpMinor: minor(catchUpMinor) };
}
