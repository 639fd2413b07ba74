import type { Derivation, DerivationStep } from '#domain/derivation';
import type { Eye } from '#domain/eye';
import {
  applyRate,
  formatMoney,
  greatest,
  least,
  type Minor,
  negate,
  subtract,
  sum,
  ZERO,
} from '#domain/money/index';
import { formatRate } from '#domain/pricing/index';
import type { ClinicDate } from '#domain/time/index';
import type { FeeAgreement, FeeTerms } from './agreement.ts';
import { bandFee, bandWords } from './volume-bands.ts';

/** An eye as the agreement looks at it. Amounts are of this eye alone. */
export interface FeeEvent {
  readonly kind: 'surgery' | 'enhancement';
  readonly eye: Eye;
  /** What was done, by the code of the price book, and its name. */
  readonly procedureCode: string;
  readonly procedureLabel: string;
  /** null: not done yet. */
  readonly doneOn: ClinicDate | null;
  /** The eye's share of the price; zero under cover. */
  readonly shareMinor: Minor;
  /** How much of the share has been collected. */
  readonly collectedMinor: Minor;
  /** Tax within what was collected. */
  readonly taxMinor: Minor;
  /** Card fees and lender's discount on what was collected. */
  readonly paymentCostsMinor: Minor;
  /** Licence and consumables of the eye. */
  readonly directCostsMinor: Minor;
  /** Eyes of this surgeon that accrued earlier in the band's period. */
  readonly eyesBefore: number;
  /** What accrued to this surgeon earlier in the month of the eye. */
  readonly accruedThisMonthMinor: Minor;
}

/** What a fee goes back by, should money for the eye be returned; kept with the accrual (invariant 17). */
export type ClawbackRule =
  /** The rate the fee was, of what is returned without tax. */
  | { readonly kind: 'rate'; readonly rateBp: number }
  /** The part of the fee that what is returned is of this share. */
  | { readonly kind: 'share'; readonly shareMinor: Minor };

export type HeldReason = 'not_done' | 'unpaid' | 'no_rate';

export type FeeOutcome =
  | {
      readonly state: 'accrued';
      readonly feeMinor: Minor;
      readonly clawback: ClawbackRule;
      readonly feeAgreementId: number;
      readonly versionNo: number;
      readonly why: Derivation;
    }
  | {
      readonly state: 'held';
      readonly reason: HeldReason;
      /** What is missing of the eye's share; zero where money is not the reason. */
      readonly missingMinor: Minor;
      readonly words: string;
      readonly why: Derivation;
    };

const EYE_NAMES: Readonly<Record<Eye, string>> = { OD: 'the right eye', OS: 'the left eye' };

/**
 * The fee an eye earns under the agreement version in force when it was done, or why it is held. Rounded half away from
 * zero; never below zero.
 */
export function accrueFee(event: FeeEvent, agreement: FeeAgreement): FeeOutcome {
  const title = `Fee for ${EYE_NAMES[event.eye]}`;
  const held = whyHeld(event, agreement.terms);
  const version = `agreement version ${agreement.versionNo}`;
  if (held) {
    const rule = { label: 'Agreement', text: `since ${agreement.effectiveOn}`, version };
    return { state: 'held', ...held, why: { title, steps: [rule, ...heldSteps(event)], note: held.words } };
  }
  const earned = earnedFee(event, agreement.terms, version);
  const capped = capFee(event, agreement.terms, earned.feeMinor, version);
  return {
    state: 'accrued',
    feeMinor: capped.feeMinor,
    clawback: earned.clawback,
    feeAgreementId: agreement.feeAgreementId,
    versionNo: agreement.versionNo,
    why: {
      title,
      steps: [...earned.steps, ...capped.steps, { label: 'Fee', amountMinor: capped.feeMinor }],
    },
  };
}

function whyHeld(event: FeeEvent, terms: FeeTerms) {
  if (event.doneOn === null) {
    return { reason: 'not_done', missingMinor: ZERO, words: 'The eye is not done yet.' } as const;
  }
  if (event.kind === 'surgery' && terms.basis.kind === 'per_eye') {
    if (terms.basis.byProcedure[event.procedureCode] === undefined) {
      const words = `The agreement names no fee for ${event.procedureLabel}.`;
      return { reason: 'no_rate', missingMinor: ZERO, words } as const;
    }
  }
  const missingMinor = greatest(subtract(event.shareMinor, event.collectedMinor), ZERO);
  if (terms.trigger === 'done_and_collected' && missingMinor > 0) {
    const words = `Balance of ${formatMoney(missingMinor, terms.currency)} unpaid.`;
    return { reason: 'unpaid', missingMinor, words } as const;
  }
  return undefined;
}

function heldSteps(event: FeeEvent): DerivationStep[] {
  return [
    { label: 'Share of the eye', amountMinor: event.shareMinor },
    { label: 'Collected of it', amountMinor: event.collectedMinor },
  ];
}

interface Earned {
  readonly feeMinor: Minor;
  readonly clawback: ClawbackRule;
  readonly steps: readonly DerivationStep[];
}

function earnedFee(event: FeeEvent, terms: FeeTerms, version: string): Earned {
  if (event.kind === 'enhancement') return enhancementFee(event, terms, version);
  const { basis } = terms;
  if (basis.kind === 'rate_of_collected') return rateFee(event, basis, version);
  const { feeMinor, step } =
    basis.kind === 'per_eye'
      ? {
          feeMinor: basis.byProcedure[event.procedureCode] ?? ZERO,
          step: { label: event.procedureLabel, text: 'a sum per eye' },
        }
      : {
          feeMinor: bandFee(basis.bands, basis.reading, event.eyesBefore),
          step: {
            label: `Eye ${event.eyesBefore + 1} of the ${basis.per}`,
            text: bandWords(basis, event.eyesBefore),
          },
        };
  const share: ClawbackRule = { kind: 'share', shareMinor: event.shareMinor };
  return {
    feeMinor,
    clawback: share,
    steps: [{ ...step, amountMinor: feeMinor, rule: basis.kind, version }],
  };
}

function enhancementFee(event: FeeEvent, terms: FeeTerms, version: string): Earned {
  const { enhancement } = terms;
  if (enhancement?.kind === 'rate_of_collected') {
    return rateFee(event, { ...enhancement, lessPaymentCosts: false, lessDirectCosts: false }, version);
  }
  const feeMinor = enhancement?.amountMinor ?? ZERO;
  const text = enhancement ? 'a sum per eye' : 'the agreement pays none';
  return {
    feeMinor,
    clawback: { kind: 'share', shareMinor: event.shareMinor },
    steps: [{ label: 'Enhancement', text, amountMinor: feeMinor, rule: 'enhancement', version }],
  };
}

function rateFee(
  event: FeeEvent,
  basis: { readonly rateBp: number; readonly lessPaymentCosts: boolean; readonly lessDirectCosts: boolean },
  version: string,
): Earned {
  const off: DerivationStep[] = [
    { label: 'Tax', amountMinor: negate(event.taxMinor) },
    ...(basis.lessPaymentCosts
      ? [{ label: 'Card and lender costs', amountMinor: negate(event.paymentCostsMinor) }]
      : []),
    ...(basis.lessDirectCosts
      ? [{ label: 'Licence and consumables', amountMinor: negate(event.directCostsMinor) }]
      : []),
  ].filter(({ amountMinor }) => amountMinor !== 0);
  const net = greatest(sum([event.collectedMinor, ...off.map((step) => step.amountMinor ?? ZERO)]), ZERO);
  const feeMinor = applyRate(net, basis.rateBp);
  const rate = formatRate(basis.rateBp);
  return {
    feeMinor,
    clawback: { kind: 'rate', rateBp: basis.rateBp },
    steps: [
      { label: 'Collected for the eye', amountMinor: event.collectedMinor },
      ...off,
      { label: 'Counted', amountMinor: net },
      { label: `${rate} of it`, amountMinor: feeMinor, rule: 'rate_of_collected', version },
    ],
  };
}

function capFee(event: FeeEvent, terms: FeeTerms, feeMinor: Minor, version: string) {
  if (terms.monthlyCapMinor === null) return { feeMinor, steps: [] };
  const room = greatest(subtract(terms.monthlyCapMinor, event.accruedThisMonthMinor), ZERO);
  const allowed = least(feeMinor, room);
  if (allowed === feeMinor) return { feeMinor, steps: [] };
  const cap: DerivationStep = {
    label: 'Over the month’s cap',
    amountMinor: subtract(allowed, feeMinor),
    text: `at most ${formatMoney(terms.monthlyCapMinor, terms.currency)} a month`,
    rule: 'cap',
    version,
  };
  return { feeMinor: allowed, steps: [cap] };
}
