import { queryOptions, useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Link } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { useSession } from '#client/api/session.ts';
import { Button, LinkButton } from '#client/ui/button.tsx';
import { Dialog } from '#client/ui/dialog.tsx';
import { MoneyField, SelectField, TextAreaField, TextField } from '#client/ui/fields.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { Money } from '#client/ui/money.tsx';
import { DefinitionRows, Page, Section } from '#client/ui/page.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { useSite } from '#client/ui/site.tsx';
import { EmptyState, ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import { Tie } from '#client/ui/tie.tsx';
import { listReceipts, type ReceiptView } from '#contract/payments';
import {
  closeTill,
  countTill,
  explainTill,
  listTills,
  moveTillCash,
  openTill,
  type TillView,
} from '#contract/tills';
import { formatAmount, type Minor, minor } from '#domain/money/index';
import { TENDER_LABEL } from '#domain/payments/index';
import { formatTime } from '#domain/time/index';

type Session = TillView['sessions'][number];

const tillsQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['tills', siteId],
    queryFn: ({ signal }) => call(listTills, { params: { siteId } }, signal),
  });

/** The day's tills, from float to close, and its receipts. */
export function TakingsPage() {
  const site = useSite();
  const tills = useQuery(tillsQuery(site.siteId));
  const receipts = useQuery({
    queryKey: ['receipts', site.siteId, site.businessDay],
    queryFn: ({ signal }) =>
      call(listReceipts, { params: { siteId: site.siteId }, query: { day: site.businessDay } }, signal),
  });
  return (
    <Page
      title="Takings"
      over={site.name}
      lead="Tills counted blind, receipts of the day."
      actions={
        <LinkButton kind="primary" to="/takings/close">
          Close the day
        </LinkButton>
      }
    >
      {tills.isPending ? <Skeleton rows={4} label="Fetching the tills" /> : null}
      {tills.isError ? <ErrorState error={tills.error} retry={() => void tills.refetch()} /> : null}
      {tills.data?.tills.map((till) => (
        <Till key={till.tillId} till={till} answer={tills.data} />
      ))}
      <Section title="Receipts of the day">
        {receipts.isPending ? <Skeleton rows={4} label="Fetching the receipts" /> : null}
        {receipts.isError ? (
          <ErrorState error={receipts.error} retry={() => void receipts.refetch()} />
        ) : null}
        {receipts.data ? <Receipts receipts={receipts.data.receipts} zone={site.zone} /> : null}
      </Section>
    </Page>
  );
}

interface Answer {
  readonly currency: string;
  readonly denominations: readonly { readonly valueMinor: Minor; readonly kind: 'note' | 'coin' }[];
}

function Till({ till, answer }: { readonly till: TillView; readonly answer: Answer }) {
  const open = till.sessions.some((session) => session.state !== 'closed');
  return (
    <Section
      title={till.name}
      aside={
        <StateWord tone={open ? 'waiting' : 'plain'}>{till.sessions.at(-1)?.state ?? 'not opened'}</StateWord>
      }
    >
      {till.sessions.map((session) => (
        <Shift key={session.tillSessionId} session={session} answer={answer} />
      ))}
      {open ? null : <OpenTill till={till} currency={answer.currency} />}
    </Section>
  );
}

/** Everything that changes a till is fetched anew afterwards. */
function useTillChange<Input>(run: (input: Input) => Promise<unknown>, done?: () => void) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: run,
    onSuccess: async () => {
      await client.invalidateQueries({ queryKey: ['tills'] });
      await client.invalidateQueries({ queryKey: ['day'] });
      done?.();
    },
  });
}

function useMayRun(): boolean {
  const roles = useSession().person?.roles ?? [];
  return roles.includes('front_desk') || roles.includes('manager');
}

function OpenTill({ till, currency }: { readonly till: TillView; readonly currency: string }) {
  const [floatMinor, setFloat] = useState<Minor | null>(till.holdsMinor);
  const open = useTillChange((amount: Minor) =>
    call(openTill, { params: { tillId: till.tillId }, body: { floatMinor: amount } }),
  );
  if (!useMayRun()) return <p className="text-soft">Not opened.</p>;
  return (
    <form
      className="flex flex-wrap items-end gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        if (floatMinor !== null) open.mutate(floatMinor);
      }}
    >
      <MoneyField
        className="w-48"
        label={`Float counted, ${currency}`}
        currency={currency}
        amount={floatMinor}
        onAmount={setFloat}
        error={open.error?.message}
      />
      <Button type="submit" sending={open.isPending}>
        Open {till.name}
      </Button>
    </form>
  );
}

function Shift({ session, answer }: { readonly session: Session; readonly answer: Answer }) {
  const { currency } = answer;
  const site = useSite();
  const mayRun = useMayRun();
  return (
    <div className="mb-6">
      <DefinitionRows
        rows={[
          {
            label: `Float, opened by ${session.openedBy} at ${formatTime(session.openedAt, site.zone)}`,
            value: <Money amount={session.floatMinor} currency={currency} />,
          },
          ...session.movements.map((move) => ({
            label: `${move.kind === 'drop' ? 'Drop' : 'Paid out'}, ${move.reason}, ${formatTime(move.at, site.zone)}`,
            value: <Money amount={-move.amountMinor} currency={currency} />,
          })),
          ...(session.shouldHoldMinor !== null && session.shouldHoldWhy !== null
            ? [
                {
                  label: 'Should hold',
                  value: (
                    <Figure
                      id={`should-${session.tillSessionId}`}
                      amount={session.shouldHoldMinor}
                      currency={currency}
                      why={session.shouldHoldWhy}
                    />
                  ),
                },
              ]
            : []),
          ...(session.countedMinor === null
            ? []
            : [
                {
                  label: `Holds, counted by ${session.countedBy ?? ''}`,
                  value: <Money amount={session.countedMinor} currency={currency} />,
                },
              ]),
          ...(session.differenceMinor === null
            ? []
            : [
                {
                  label: session.differenceReason ? `Difference: ${session.differenceReason}` : 'Difference',
                  value: <Tie difference={session.differenceMinor} currency={currency} />,
                },
              ]),
          ...(session.closedBy ? [{ label: 'Closed by', value: session.closedBy }] : []),
        ]}
      />
      {mayRun && session.state !== 'closed' ? <ShiftActions session={session} answer={answer} /> : null}
    </div>
  );
}

function ShiftActions({ session, answer }: { readonly session: Session; readonly answer: Answer }) {
  const [doing, setDoing] = useState<'move' | 'count' | null>(null);
  return (
    <div className="mt-4 flex flex-wrap items-start gap-4">
      {session.state === 'open' ? <Button onPress={() => setDoing('move')}>Move cash</Button> : null}
      <Button kind={session.state === 'open' ? 'secondary' : 'quiet'} onPress={() => setDoing('count')}>
        {session.state === 'open' ? 'Count the till' : 'Count again'}
      </Button>
      {session.state === 'counted' ? <CloseShift session={session} currency={answer.currency} /> : null}
      <Dialog title="Move cash out of the till" open={doing === 'move'} onClose={() => setDoing(null)}>
        <MoveCash session={session} currency={answer.currency} done={() => setDoing(null)} />
      </Dialog>
      <Dialog title="Count the till" open={doing === 'count'} onClose={() => setDoing(null)}>
        <CountTill session={session} answer={answer} done={() => setDoing(null)} />
      </Dialog>
    </div>
  );
}

function MoveCash({
  session,
  currency,
  done,
}: {
  readonly session: Session;
  readonly currency: string;
  readonly done: () => void;
}) {
  const [kind, setKind] = useState<'drop' | 'paid_out'>('drop');
  const [amountMinor, setAmount] = useState<Minor | null>(null);
  const [reason, setReason] = useState('to the safe');
  const move = useTillChange(
    (amount: Minor) =>
      call(moveTillCash, {
        params: { tillSessionId: session.tillSessionId },
        body: { kind, amountMinor: amount, reason },
      }),
    done,
  );
  return (
    <form
      className="grid gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        if (amountMinor !== null) move.mutate(amountMinor);
      }}
    >
      <SelectField
        label="What"
        value={kind}
        onChange={(value) => setKind(value as typeof kind)}
        choices={[
          { value: 'drop', label: 'Drop to the safe' },
          { value: 'paid_out', label: 'Pay something small' },
        ]}
      />
      <MoneyField
        label={`Amount, ${currency}`}
        currency={currency}
        amount={amountMinor}
        onAmount={setAmount}
      />
      <TextField label="What for" value={reason} onChange={setReason} error={move.error?.message} />
      <div>
        <Button kind="primary" type="submit" sending={move.isPending}>
          Move it
        </Button>
      </div>
    </form>
  );
}

/** Blind: what the till should hold is told only after the count. */
function CountTill({
  session,
  answer,
  done,
}: {
  readonly session: Session;
  readonly answer: Answer;
  readonly done: () => void;
}) {
  const [count, setCount] = useState<Readonly<Record<string, number>>>({});
  const total = answer.denominations.reduce(
    (sum, each) => sum + each.valueMinor * (count[String(each.valueMinor)] ?? 0),
    0,
  );
  const save = useTillChange(
    () => call(countTill, { params: { tillSessionId: session.tillSessionId }, body: { count } }),
    done,
  );
  return (
    <form
      onSubmit={(event) => {
        event.preventDefault();
        save.mutate(undefined);
      }}
    >
      <p className="mb-3 text-small text-soft">
        Pieces of each note and coin. What the till should hold is shown after the count.
      </p>
      <div className="grid grid-cols-2 gap-x-6 gap-y-2">
        {answer.denominations.map((each) => (
          <label
            key={each.valueMinor}
            className="flex items-center justify-between gap-3 border-b border-rule py-1"
          >
            <span className="tabular">{formatAmount(each.valueMinor, answer.currency as never)}</span>
            <input
              inputMode="numeric"
              aria-label={`${each.kind} of ${formatAmount(each.valueMinor, answer.currency as never)}`}
              value={count[String(each.valueMinor)] ?? ''}
              onChange={(event) =>
                setCount((before) => ({
                  ...before,
                  [String(each.valueMinor)]: Number.parseInt(
                    event.target.value.replace(/\D/g, '') || '0',
                    10,
                  ),
                }))
              }
              className="tabular min-h-8 w-16 rounded-sm border border-edge bg-sheet px-2 text-right"
            />
          </label>
        ))}
      </div>
      <p className="mt-4 flex justify-between border-b-2 border-ink py-2 text-lead font-extrabold">
        <span>Counted</span> <Money amount={minor(total)} currency={answer.currency} />
      </p>
      {save.error ? (
        <p role="alert" className="mt-3 font-semibold text-bengal">
          {save.error.message}
        </p>
      ) : null}
      <div className="mt-4">
        <Button kind="primary" type="submit" sending={save.isPending}>
          Keep this count
        </Button>
      </div>
    </form>
  );
}

function CloseShift({ session, currency }: { readonly session: Session; readonly currency: string }) {
  const [reason, setReason] = useState('');
  const [nextFloat, setNextFloat] = useState<Minor | null>(session.floatMinor);
  const explain = useTillChange(() =>
    call(explainTill, { params: { tillSessionId: session.tillSessionId }, body: { reason } }),
  );
  const close = useTillChange((amount: Minor) =>
    call(closeTill, { params: { tillSessionId: session.tillSessionId }, body: { nextFloatMinor: amount } }),
  );
  const needsReason = session.differenceMinor !== 0 && session.differenceReason === null;
  if (needsReason) {
    return (
      <div className="grow">
        <TextAreaField
          label="Reason of the difference"
          value={reason}
          onChange={setReason}
          error={explain.error?.message}
        />
        <Button className="mt-3" sending={explain.isPending} onPress={() => explain.mutate(undefined)}>
          Give the reason
        </Button>
      </div>
    );
  }
  if (session.countedByMe)
    return <p className="self-center text-povidone">Waits for a second person to close it.</p>;
  return (
    <div className="flex flex-wrap items-end gap-4">
      <MoneyField
        className="w-48"
        label={`Float that stays, ${currency}`}
        currency={currency}
        amount={nextFloat}
        onAmount={setNextFloat}
        error={close.error?.message}
      />
      <Button
        kind="primary"
        sending={close.isPending}
        onPress={() => (nextFloat === null ? undefined : close.mutate(nextFloat))}
      >
        Close as the second person
      </Button>
    </div>
  );
}

function Receipts({ receipts, zone }: { readonly receipts: readonly ReceiptView[]; readonly zone: string }) {
  if (receipts.length === 0)
    return <EmptyState title="No receipt yet today">Payments at the desk and online appear here.</EmptyState>;
  const currency = receipts[0]?.currency ?? 'EUR';
  return (
    <SheetTable
      caption="Receipts of the day"
      rows={receipts}
      rowKey={(receipt) => receipt.receiptId}
      columns={[
        {
          id: 'number',
          head: 'Receipt',
          cell: (receipt) => <Link to={`/takings/receipts/${receipt.receiptId}`}>{receipt.number}</Link>,
        },
        { id: 'at', head: 'At', wide: true, cell: (receipt) => formatTime(receipt.recordedAt, zone) },
        { id: 'payer', head: 'Paid by', cell: (receipt) => receipt.payerName },
        {
          id: 'by',
          head: 'By',
          wide: true,
          cell: (receipt) =>
            receipt.tenders.map((tender) => TENDER_LABEL[tender.tender].toLowerCase()).join(', '),
        },
        {
          id: 'amount',
          head: `Received, ${currency}`,
          align: 'right',
          cell: (receipt) => <Money amount={receipt.totalMinor} currency={currency} />,
        },
        {
          id: 'state',
          head: 'State',
          cell: (receipt) =>
            receipt.voided ? (
              <StateWord tone="wrong">void</StateWord>
            ) : (
              <StateWord tone="settled">taken</StateWord>
            ),
        },
      ]}
    />
  );
}
