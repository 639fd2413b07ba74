import type { Derivation, DerivationStep } from '#domain/derivation';
import type { Eye } from '#domain/eye';
import {
  add,
  applyRate,
  greatest,
  least,
  type Minor,
  negate,
  subtract,
  sum,
  ZERO,
} from '#domain/money/index';
import {
  type CancellationEvent,
  type CancellationLadder,
  type Charge,
  keptByLadder,
} from '#domain/pricing/index';
import { type ClinicDate, daysBetween } from '#domain/time/index';

/** An eye that will not be treated. */
export interface CancelledEye {
  readonly eye: Eye;
  readonly surgeryOn: ClinicDate | null;
  /** Its share of the price: what a rate of the ladder is of, and the most that is kept of it. */
  readonly shareMinor: Minor;
}

export interface CancellationAsked {
  /** The ladder as the accepted quote disclosed it, and where: "quote LQ-0377, version 2". */
  readonly ladder: CancellationLadder;
  readonly disclosedIn: string;
  readonly event: CancellationEvent;
  readonly on: ClinicDate;
  readonly acceptedOn: ClinicDate;
  readonly eyes: readonly CancelledEye[];
  /** Paid towards the course and not returned. */
  readonly paidMinor: Minor;
  /** Price of what stays: of the eyes done or still to be done. Zero when the whole course goes. */
  readonly staysMinor: Minor;
}

export interface CancellationFigure {
  /** Per eye: what is kept and by which row of the ladder ("reflection", a rung's id, "no_show" …). */
  readonly rows: readonly { readonly eye: Eye; readonly keptMinor: Minor; readonly by: string }[];
  readonly keptMinor: Minor;
  /** Paid less what stays and what is kept; never below zero. */
  readonly comesBackMinor: Minor;
  /** What stays and what is kept beyond what was paid. */
  readonly stillOwedMinor: Minor;
  readonly why: Derivation;
}

const EYE_NAMES: Readonly<Record<Eye, string>> = { OD: 'right eye', OS: 'left eye' };

/**
 * What is kept and what comes back when a course, or eyes of it, are cancelled: always by the ladder the patient accepted,
 * never by how the price was allocated in the books.
 */
export function cancellationFigure(asked: CancellationAsked): CancellationFigure {
  const { ladder, event, on, acceptedOn, paidMinor, staysMinor } = asked;
  const rows = asked.eyes.map((eye) => ({
    ...keptByLadder(ladder, {
      event,
      on,
      acceptedOn,
      surgeryOn: eye.surgeryOn,
      shareMinor: eye.shareMinor,
    }),
    eye: eye.eye,
    words: rowWords(asked, eye),
  }));
  const keptMinor = sum(rows.map((row) => row.keptMinor));
  const left = subtract(subtract(paidMinor, staysMinor), keptMinor);
  const comesBackMinor = greatest(left, ZERO);
  const stillOwedMinor = greatest(negate(left), ZERO);
  const steps: DerivationStep[] = [
    { label: 'Paid', amountMinor: paidMinor },
    ...(staysMinor === 0 ? [] : [{ label: 'Price of what stays', amountMinor: negate(staysMinor) }]),
    ...rows.map((row) => ({
      label: `Kept, ${EYE_NAMES[row.eye]}`,
      text: row.words,
      amountMinor: negate(row.keptMinor),
      rule: row.by,
      version: asked.disclosedIn,
    })),
    left < 0
      ? { label: 'Still owed', amountMinor: stillOwedMinor }
      : { label: 'Comes back', amountMinor: comesBackMinor },
  ];
  return {
    rows: rows.map(({ eye, keptMinor: kept, by }) => ({ eye, keptMinor: kept, by })),
    keptMinor,
    comesBackMinor,
    stillOwedMinor,
    why: { title: 'What comes back', steps, note: `Shown to the patient with ${asked.disclosedIn}.` },
  };
}

function rowWords({ ladder, event, on, acceptedOn }: CancellationAsked, eye: CancelledEye): string {
  const { by } = keptByLadder(ladder, {
    event,
    on,
    acceptedOn,
    surgeryOn: eye.surgeryOn,
    shareMinor: eye.shareMinor,
  });
  if (by === 'reflection') return `within ${ladder.reflectionDays} days of accepting`;
  if (by === 'unsuitable') return 'found unsuitable';
  if (by === 'clinic_cancels') return 'the clinic cancels';
  if (by === 'no_show') return 'did not come';
  if (by === 'no_day' || eye.surgeryOn === null) return 'no day of surgery agreed';
  const days = daysBetween(on, eye.surgeryOn);
  return `${days} ${days === 1 ? 'day' : 'days'} before surgery`;
}

/**
 * What moving the day costs: nothing for the free moves, then the ladder's fee for each eye moved.
 *
 * @param movesBefore how often the patient moved before; moves by the clinic are not counted
 */
export function moveFee(ladder: CancellationLadder, movesBefore: number, shares: readonly Minor[]): Minor {
  const { freeMoves, fee } = ladder.reschedule;
  if (movesBefore < freeMoves) return ZERO;
  return shares.reduce((total, share) => add(total, least(chargeOf(fee, share), share)), ZERO);
}

function chargeOf(charge: Charge, of: Minor): Minor {
  return charge.kind === 'amount' ? charge.amountMinor : applyRate(of, charge.rateBp);
}
