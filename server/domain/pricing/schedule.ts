import { add, greatest, least, type Minor, subtract, ZERO } from '#domain/money/index';
import { addDays, type ClinicDate } from '#domain/time/index';
import type { WantedCourse } from './check-input.ts';
import type { ByColumn, CreditTerms, Due } from './course.ts';
import { formatRate } from './explain.ts';
import { chargeOf } from './parts.ts';
import type { DepositRule } from './price-book.ts';

/** What is paid to accept: never under the floor, over the ceiling, or over the price itself. */
export function depositOf(rule: DepositRule, priceMinor: Minor): Minor {
  let deposit = chargeOf(rule.charge, priceMinor);
  if (rule.floorMinor !== null) deposit = greatest(deposit, rule.floorMinor);
  if (rule.ceilingMinor !== null) deposit = least(deposit, rule.ceilingMinor);
  return least(deposit, priceMinor);
}

/** "a week before surgery", "10 days before surgery". */
export function daysBeforeWords(days: number): string {
  if (days === 0) return 'on the day of surgery';
  if (days === 1) return 'the day before surgery';
  if (days === 7) return 'a week before surgery';
  return days % 7 === 0 ? `${days / 7} weeks before surgery` : `${days} days before surgery`;
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
  return [depositDue(wanted, depositMinor), ...later].filter((due) => due.amountMinor > 0);
}

function depositDue(wanted: WantedCourse, amountMinor: Minor): Due {
  const { charge } = wanted.compiled.book.deposit;
  return {
    id: 'deposit',
    kind: 'deposit',
    label: 'On accepting',
    detail: charge.kind === 'rate' ? `deposit, ${formatRate(charge.rateBp)}` : 'deposit',
    dueOn: wanted.acceptedOn,
    amountMinor,
    from: 'patient',
  };
}

/** The balance before the surgery; staged eyes are paid one by one, each before its own day. */
function balances(wanted: WantedCourse, rest: Minor, shares: ByColumn): Due[] {
  const [first, second] = wanted.eyes;
  const detail = daysBeforeWords(wanted.compiled.book.balanceDueDays);
  const base = { kind: 'balance', from: 'patient', detail } as const;
  if (!wanted.staged || !second) {
    return [
      { ...base, id: 'balance', label: 'Balance', dueOn: balanceDay(wanted, first?.on), amountMinor: rest },
    ];
  }
  const secondShare = least(shares[second.eye], rest);
  const names = { OD: 'right eye', OS: 'left eye' } as const;
  return [
    {
      ...base,
      id: 'balance-first',
      label: `Balance, ${names[second.eye === 'OD' ? 'OS' : 'OD']}`,
      dueOn: balanceDay(wanted, first?.on),
      amountMinor: subtract(rest, secondShare),
    },
    {
      ...base,
      id: 'balance-second',
      label: `Balance, ${names[second.eye]}`,
      dueOn: balanceDay(wanted, second.on),
      amountMinor: secondShare,
    },
  ];
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
    detail: daysBeforeWords(wanted.compiled.book.balanceDueDays),
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
  return schedule
    .filter((due) => due.dueOn !== null && (due.dueOn < on || due.dueOn <= acceptedOn))
    .reduce((total, due) => add(total, due.amountMinor), ZERO);
}
