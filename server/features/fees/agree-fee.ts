import { checkFeeTerms, type FeeTerms } from '#domain/fees/index';
import type { ClinicDate } from '#domain/time/index';
import { recordAudit } from '#server/features/audit/index';
import type { Actor } from '#server/platform/actor';
import { insertRow, rawRows, sqlInstant } from '#server/platform/db';
import { isDuplicate } from '#server/platform/db-errors';
import type { Deps } from '#server/platform/deps';
import { conflict, notFound, Problem, refused } from '#server/platform/problem';
import { inTransaction } from '#server/platform/transaction';

export interface FeeToAgree {
  readonly surgeonUserId: number;
  readonly effectiveOn: ClinicDate;
  readonly terms: FeeTerms;
  readonly agreedBy: number;
  readonly actor: Actor;
}

/**
 * Adds a version of a surgeon's agreement; what accrued under earlier versions keeps them (invariant 17).
 * @throws Problem not_found, invalid_input naming the term, refused 'fees_accrued_since', conflict 'already_agreed'
 */
export async function agreeSurgeonFee(
  deps: Deps,
  agreed: FeeToAgree,
): Promise<{ feeAgreementId: number; versionNo: number }> {
  const findings = checkFeeTerms(agreed.terms);
  if (findings.length > 0) {
    throw new Problem('invalid_input', {
      detail: findings.map((finding) => finding.words).join(' '),
      fields: findings.map(({ field, words }) => ({ field: `terms.${field}`, message: words })),
    });
  }
  return await inTransaction(deps.db, async (trx) => {
    const [surgeon] = await rawRows<{ user_id: number }>(
      trx,
      `SELECT u.user_id FROM users u JOIN user_roles r ON r.user_id = u.user_id AND r.role = 'surgeon' WHERE u.user_id = ? FOR UPDATE`,
      [agreed.surgeonUserId],
    );
    if (!surgeon) throw notFound('surgeon');
    const [since] = await rawRows<{ n: number }>(
      trx,
      'SELECT COUNT(*) AS n FROM fee_lines WHERE surgeon_user_id = ? AND earned_on >= ?',
      [agreed.surgeonUserId, agreed.effectiveOn],
    );
    if ((since?.n ?? 0) > 0) {
      throw refused(
        'fees_accrued_since',
        'Fees have accrued on or after this day. Choose a later day for the new version.',
        'effectiveOn',
      );
    }
    const [last] = await rawRows<{ n: number }>(
      trx,
      'SELECT COALESCE(MAX(version_no), 0) AS n FROM fee_agreements WHERE surgeon_user_id = ?',
      [agreed.surgeonUserId],
    );
    const versionNo = (last?.n ?? 0) + 1;
    try {
      const feeAgreementId = await insertRow(trx, 'fee_agreements', {
        surgeon_user_id: agreed.surgeonUserId,
        version_no: versionNo,
        effective_on: agreed.effectiveOn,
        terms: JSON.stringify(agreed.terms),
        created_by: agreed.agreedBy,
        created_at: sqlInstant(deps.clock.now()),
      });
      await recordAudit(trx, deps, {
        actor: agreed.actor,
        action: 'fee_agreement.added',
        subjectType: 'fee_agreement',
        subjectId: feeAgreementId,
        after: { surgeonUserId: agreed.surgeonUserId, effectiveOn: agreed.effectiveOn, terms: agreed.terms },
      });
      return { feeAgreementId, versionNo };
    } catch (error) {
      if (isDuplicate(error, 'fee_agreements_effective')) {
        throw conflict('already_agreed', 'A version with this first day is there already.');
      }
      throw error;
    }
  });
}
