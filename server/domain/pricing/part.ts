import type { Laterality } from '#domain/eye';
import { applyRate, type Minor, ZERO } from '#domain/money/index';
import type { LineKind, ObligationKind } from './course.ts';
import type { Step } from './explain.ts';
import type { Charge } from './price-book.ts';

/** Something promised and what it would cost by itself; one or more parts make an obligation. */
export interface Promised {
  readonly obligationId: string;
  readonly kind: ObligationKind;
  readonly label: string;
  readonly laterality: Laterality;
  readonly standAloneMinor: Minor;
}

/** What a line says besides its figures. */
export interface LineWords {
  readonly row: string;
  readonly kind: LineKind;
  readonly ruleId: string;
  readonly label: string;
  readonly detail: string | null;
}

/** A priced line with what has come off it and its tax. Lives and changes only while a course is priced. */
export interface Part {
  readonly words: LineWords;
  readonly laterality: Laterality;
  readonly taxClassId: string;
  readonly promise: Promised | null;
  readonly why: readonly Step[];
  /** Surgery in the sense of discounts: procedures, their bands, a package. */
  readonly isSurgery: boolean;
  readonly grossMinor: Minor;
  /** As the book states it, less reductions. */
  netMinor: Minor;
  /** Set by `taxParts`: payable = without tax + tax. */
  rateBp: number;
  taxMinor: Minor;
  withoutTaxMinor: Minor;
  payableMinor: Minor;
}

/** A reduction of one part, kept with its reason until lines are made of it. */
export interface Reduction {
  readonly words: LineWords;
  readonly part: Part;
  readonly offMinor: Minor;
  /** What is said once for the line; the parts follow. */
  readonly why: readonly Step[];
}

/** A part before anything came off it. (Written out: copying objects by spread costs more than the pricing.) */
export function newPart(
  words: LineWords,
  laterality: Laterality,
  taxClassId: string,
  grossMinor: Minor,
  promise: Promised | null,
  why: readonly Step[],
  isSurgery = false,
): Part {
  return {
    words,
    laterality,
    taxClassId,
    promise,
    why,
    isSurgery,
    grossMinor,
    netMinor: grossMinor,
    rateBp: 0,
    taxMinor: ZERO,
    withoutTaxMinor: ZERO,
    payableMinor: ZERO,
  };
}

/** Takes an amount off a part, never below nothing. Returns what came off. */
export function takeOff(part: Part, offMinor: Minor): Minor {
  const off = offMinor > part.netMinor ? part.netMinor : offMinor;
  part.netMinor = (part.netMinor - off) as Minor;
  return off;
}

/** An amount as it stands, a rate of a base rounded half away from zero. */
export function chargeOf(charge: Charge, baseMinor: Minor): Minor {
  return charge.kind === 'amount' ? charge.amountMinor : applyRate(baseMinor, charge.rateBp);
}
