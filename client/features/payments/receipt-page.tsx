import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Link, useParams } from 'react-router-dom';
import { call, pathOf } from '#client/api/call.ts';
import { useSession } from '#client/api/session.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { ConfirmDialog } from '#client/ui/dialog.tsx';
import { TextAreaField } from '#client/ui/fields.tsx';
import { Money } from '#client/ui/money.tsx';
import { DefinitionRows, Page } from '#client/ui/page.tsx';
import { useSite } from '#client/ui/site.tsx';
import { ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import { getReceiptPdf } from '#contract/documents';
import { getReceipt, type ReceiptView, voidReceipt } from '#contract/payments';
import { TENDER_LABEL } from '#domain/payments/index';
import { formatDay } from '#domain/time/index';

/** A receipt: what was taken and how, its paper, and on the open day the way to void it. */
export function ReceiptPage() {
  const receiptId = Number(useParams().receiptId);
  const receipt = useQuery({
    queryKey: ['receipt', receiptId],
    queryFn: ({ signal }) => call(getReceipt, { params: { receiptId } }, signal),
  });
  return (
    <Page
      title={receipt.data ? `Receipt ${receipt.data.number}` : 'Receipt'}
      over={
        receipt.data?.courseId ? (
          <Link to={`/courses/${receipt.data.courseId}`}>{receipt.data.patientName}</Link>
        ) : null
      }
      lead={receipt.data ? words(receipt.data) : null}
    >
      {receipt.isPending ? <Skeleton rows={5} label="Fetching the receipt" /> : null}
      {receipt.isError ? <ErrorState error={receipt.error} retry={() => void receipt.refetch()} /> : null}
      {receipt.data ? <Receipt receipt={receipt.data} /> : null}
    </Page>
  );
}

function words(receipt: ReceiptView): string {
  return `${formatDay(receipt.occurredOn)} · paid by ${receipt.payerName}${receipt.takenBy ? `, taken by ${receipt.takenBy}` : ' online'}`;
}

function Receipt({ receipt }: { readonly receipt: ReceiptView }) {
  const { currency } = receipt;
  const pdf = pathOf(getReceiptPdf, { params: { receiptId: receipt.receiptId } });
  return (
    <div className="max-w-xl">
      {receipt.voided ? (
        <p className="mb-4 border-y-2 border-bengal py-3">
          <StateWord tone="wrong">void</StateWord> by {receipt.voided.by}: {receipt.voided.reason}
        </p>
      ) : null}
      <DefinitionRows
        rows={[
          ...receipt.tenders.map((tender) => ({
            label: tender.reference
              ? `${TENDER_LABEL[tender.tender]}, ${tender.reference}`
              : TENDER_LABEL[tender.tender],
            value: <Money amount={tender.amountMinor} currency={currency} />,
          })),
          ...(receipt.changeMinor > 0
            ? [{ label: 'Change given', value: <Money amount={-receipt.changeMinor} currency={currency} /> }]
            : []),
          ...(receipt.roundingMinor === 0
            ? []
            : [
                {
                  label: 'Cash rounding',
                  value: <Money amount={receipt.roundingMinor} currency={currency} />,
                },
              ]),
          {
            label: 'Received',
            value: <Money amount={receipt.totalMinor} currency={currency} alone />,
            strong: true,
          },
          ...(receipt.creditMinor > 0
            ? [
                {
                  label: 'Of this credit on account',
                  value: <Money amount={receipt.creditMinor} currency={currency} />,
                },
              ]
            : []),
        ]}
      />
      <div className="mt-6 flex flex-wrap items-center gap-4">
        <a href={pdf} target="_blank" rel="noreferrer">
          Print on A5
        </a>
        <a href={`${pdf}?paper=slip`} target="_blank" rel="noreferrer">
          Print on an 80 mm slip
        </a>
        <VoidReceipt receipt={receipt} />
      </div>
    </div>
  );
}

function VoidReceipt({ receipt }: { readonly receipt: ReceiptView }) {
  const roles = useSession().person?.roles ?? [];
  const site = useSite();
  const client = useQueryClient();
  const announce = useAnnounce();
  const [open, setOpen] = useState(false);
  const [reason, setReason] = useState('');
  const undo = useMutation({
    mutationFn: () => call(voidReceipt, { params: { receiptId: receipt.receiptId }, body: { reason } }),
    onSuccess: async (next) => {
      client.setQueryData(['receipt', receipt.receiptId], next);
      setOpen(false);
      announce(`Receipt ${receipt.number} is void.`);
      await client.invalidateQueries({ queryKey: ['course'] });
    },
  });
  const mayVoid = roles.includes('front_desk') || roles.includes('manager');
  const online = receipt.tenders.some((tender) => tender.tender === 'online_card');
  if (!mayVoid || receipt.voided || online || receipt.bookedOn !== site.businessDay) return null;
  return (
    <>
      <Button kind="destructive" onPress={() => setOpen(true)}>
        Void this receipt
      </Button>
      <ConfirmDialog
        title={`Void receipt ${receipt.number}`}
        open={open}
        onClose={() => setOpen(false)}
        confirm="Void it"
        destructive
        sending={undo.isPending}
        error={undo.error?.message}
        onConfirm={() => undo.mutate()}
      >
        <p className="mb-4">
          The number stays, the entry is reversed, and both can be seen. Then take the payment again as it
          really was.
        </p>
        <TextAreaField label="Reason" value={reason} onChange={setReason} />
      </ConfirmDialog>
    </>
  );
}
