import { useState } from 'react';
import type { ProblemError } from '#client/api/problem-error.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { ConfirmDialog } from '#client/ui/dialog.tsx';
import { TextAreaField } from '#client/ui/fields.tsx';
import type { QuoteView } from '#contract/quotes';
import { useWithdrawQuote } from './queries.ts';

/** Withdraws a quote that nobody has accepted. */
export function WithdrawDialog({
  quote,
  onClose,
}: {
  readonly quote: QuoteView;
  readonly onClose: () => void;
}) {
  const withdraw = useWithdrawQuote();
  const announce = useAnnounce();
  const [reason, setReason] = useState('');
  const problem = withdraw.error as ProblemError | null;
  return (
    <ConfirmDialog
      title={`Withdraw quote ${quote.number}`}
      open
      onClose={onClose}
      confirm="Withdraw"
      destructive
      sending={withdraw.isPending}
      error={problem && problem.fields.length === 0 ? problem.message : undefined}
      onConfirm={() =>
        withdraw.mutate(
          { params: { quoteId: quote.quoteId }, body: { reason } },
          {
            onSuccess: () => {
              announce('Withdrawn. The patient’s link says so.');
              onClose();
            },
          },
        )
      }
    >
      <p className="mb-4 text-soft">
        It can no longer be accepted, and stays so. The patient’s link says that it was withdrawn.
      </p>
      <TextAreaField
        label="Reason"
        value={reason}
        onChange={setReason}
        error={problem?.fieldMessage('reason')}
      />
    </ConfirmDialog>
  );
}
