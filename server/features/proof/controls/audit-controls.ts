import { addMs } from '#domain/time/index';
import { verifyChain } from '#server/features/audit/index';
import { sqlInstant } from '#server/platform/db';
import type { ProofControl } from '../control.ts';

/** How long a row may wait for the sealer before its absence from the chain is a finding. */
const GRACE_MS = 60_000;

/** The chain of seals over entries, receipts, voids, fees and the trail. It has no "as of": a change is a change. */
const chain: ProofControl = {
  id: 'audit-chain',
  title: 'Audit chain',
  leftWords: 'entries, lines, receipts, tenders, voids, fees and audit rows as they stand',
  rightWords: 'their seals, each made from the one before',
  kind: 'findings',
  async compute(trx, { now }) {
    const { checked, findings } = await verifyChain(trx, sqlInstant(addMs(now, -GRACE_MS)));
    return {
      checked,
      findings: findings.map(({ label, finding, table, id }) => ({
        label,
        finding,
        ...(table === 'journal_entries' ? { link: `/proof/journal?before=${id + 1}` } : {}),
      })),
    };
  },
};

export const AUDIT_CONTROLS: readonly ProofControl[] = [chain];
