import { add, greatest, least, type Minor, subtract, ZERO } from '#domain/money/index';
import { addDays, type ClinicDate } from '#domain/time/index';
import type { WantedCourse } from './check-input.ts';
import type { ByColumn, CreditTerms, Due } from './course.ts';
import { chargeOf } from './part.ts';
import type { DepositRule } from './price-book.ts';

/** What is paid to accept: never under the floor, over the ceiling, or over the price itself. */
export function depositOf(rule: DepositRule, priceMinor: Minor): Minor {
  let deposit = chargeOf(rule.charge, priceMinor);
  if (rule.floorMinor !== null) deposit = greatest(deposit, rule.floorMinor);
  if (rule.ceilingMinor !== null) deposit = least(deposit, rule.ceilingMinor);
  return least(deposit, priceMinor);
}

/** Everything that falls due, in order; adds up to the total. Nothing falls due before the day of acceptance. */
export function scheduleOf(
  wanted: WantedCourse,
  depositMinor: Minor,
  totalMinor: Minor,
  shares: ByColumn,
  credit: CreditTerms | null,
): Due[] {
  const rest = subtract(totalMinor, depositMinor);
  const later =
    credit === null
      ? balances(wanted, rest, shares)
      : credit.kind === 'lender'
        ? [lenderPays(wanted, rest, credit)]
        : instalmentDues(credit);
  return [depositDue(wanted, depositMinor)].concat(later).filter((due) => due.amountMinor > 0);
}

function depositDue(wanted: WantedCourse, amountMinor: Minor): Due {
  return {
    id: 'deposit',
    kind: 'deposit',
    label: 'On accepting',
    detail: wanted.compiled.words.deposit,
    dueOn: wanted.acceptedOn,
    amountMinor,
    from: 'patient',
  };
}

/** The balance before the surgery; staged eyes are paid one by one, each before its own day. */
function balances(wanted: WantedCourse, rest: Minor, shares: ByColumn): Due[] {
  const [first, second] = wanted.eyes;
  if (!wanted.staged || !first || !second) return [balance(wanted, 'balance', 'Balance', first?.on, rest)];
  const secondShare = least(shares[second.eye], rest);
  return [
    balance(wanted, 'balance-first', BALANCE_OF[first.eye], first.on, subtract(rest, secondShare)),
    balance(wanted, 'balance-second', BALANCE_OF[second.eye], second.on, secondShare),
  ];
}

const BALANCE_OF = { OD: 'Balance, right eye', OS: 'Balance, left eye' } as const;

function balance(
  wanted: WantedCourse,
  id: string,
  label: string,
  surgeryOn: ClinicDate | null | undefined,
  amountMinor: Minor,
): Due {
  const dueOn = balanceDay(wanted, surgeryOn);
  return {
    id,
    kind: 'balance',
    label,
    detail: wanted.compiled.words.balance,
    dueOn,
    amountMinor,
    from: 'patient',
  };
}

function balanceDay(wanted: WantedCourse, surgeryOn: ClinicDate | null | undefined): ClinicDate | null {
  if (!surgeryOn) return null;
  const day = addDays(surgeryOn, -wanted.compiled.book.balanceDueDays);
  if (day < wanted.acceptedOn) return wanted.acceptedOn;
  return day;
}

function lenderPays(wanted: WantedCourse, amountMinor: Minor, credit: CreditTerms): Due {
  return {
    id: 'lender',
    kind: 'lender',
    label: credit.label,
    detail: wanted.compiled.words.balance,
    dueOn: balanceDay(wanted, wanted.eyes[0]?.on),
    amountMinor,
    from: 'lender',
  };
}

function instalmentDues(credit: CreditTerms): Due[] {
  return credit.instalments.map(({ dueOn, amountMinor }, index) => ({
    id: `instalment-${index + 1}`,
    kind: 'instalment',
    label: `Instalment ${index + 1} of ${credit.instalments.length}`,
    detail: credit.label,
    dueOn,
    amountMinor,
    from: 'patient',
  }));
}

/** What the schedule has asked for before a day; what falls due on acceptance always counts. */
export function askedBefore(schedule: readonly Due[], on: ClinicDate, acceptedOn: ClinicDate): Minor {
  let asked = ZERO;
  for (const { dueOn, amountMinor } of schedule) {
    if (dueOn !== null && (dueOn < on || dueOn <= acceptedOn)) asked = add(asked, amountMinor);
  }
  return asked;
}
