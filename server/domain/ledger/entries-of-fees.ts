import type { Eye } from '#domain/eye';
import { least, type Minor, negate, subtract, ZERO } from '#domain/money/index';
import { ACCOUNT } from './chart.ts';
import { draft, type EntryDraft, type EntryHeader } from './entry.ts';

/** Something of one payee (the surgeon, or a provider of shared care). */
export interface OfPayee extends EntryHeader {
  readonly payeeId: number;
  readonly amountMinor: Minor;
}

/** The eye a fee is for. */
export interface OfEye {
  readonly courseId: number;
  readonly eye: Eye;
}

/** A fee earned: Dr 5000 Cr 2100. */
export function feeAccruedEntry(what: OfPayee & OfEye): EntryDraft {
  const { payeeId, amountMinor, courseId, eye } = what;
  return draft('fee_accrued', what, [
    { account: ACCOUNT.surgeonFees, amountMinor, payeeId, courseId, eye },
    { account: ACCOUNT.surgeonFeesPayable, amountMinor: negate(amountMinor), payeeId, courseId, eye },
  ]);
}

/**
 * A fee taken back: Dr 2100 as far as it holds, beyond it Dr 1150, Cr 5000 (invariant 17).
 * @param what.payableMinor credit balance of 2100 for this payee
 */
export function clawbackEntry(what: OfPayee & OfEye & { readonly payableMinor: Minor }): EntryDraft {
  const { payeeId, amountMinor, courseId, eye, payableMinor } = what;
  const held = least(amountMinor, payableMinor > 0 ? payableMinor : ZERO);
  return draft('fee_clawback', what, [
    { account: ACCOUNT.surgeonFeesPayable, amountMinor: held, payeeId, courseId, eye },
    { account: ACCOUNT.surgeonReceivable, amountMinor: subtract(amountMinor, held), payeeId, courseId, eye },
    { account: ACCOUNT.surgeonFees, amountMinor: negate(amountMinor), payeeId, courseId, eye },
  ]);
}

/** A statement is issued and tax withheld from it: Dr 2100 Cr 2110. */
export function withholdingEntry(what: OfPayee): EntryDraft {
  return draft('fee_withholding', what, ofPayee(what, ACCOUNT.surgeonFeesPayable, ACCOUNT.withholding));
}

/** What a payee owes from an earlier clawback is set off against later fees: Dr 2100 Cr 1150. */
export function feeSetOffEntry(what: OfPayee): EntryDraft {
  return draft('fee_set_off', what, ofPayee(what, ACCOUNT.surgeonFeesPayable, ACCOUNT.surgeonReceivable));
}

/** A statement is paid: Dr 2100 Cr 1000. */
export function feePaidEntry(what: OfPayee): EntryDraft {
  const { payeeId, amountMinor } = what;
  return draft('fee_paid', what, [
    { account: ACCOUNT.surgeonFeesPayable, amountMinor, payeeId },
    { account: ACCOUNT.bank, amountMinor: negate(amountMinor) },
  ]);
}

function ofPayee({ payeeId, amountMinor }: OfPayee, debit: string, credit: string) {
  return [
    { account: debit, amountMinor, payeeId },
    { account: credit, amountMinor: negate(amountMinor), payeeId },
  ];
}
