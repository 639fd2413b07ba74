import { useState } from 'react';
import { call } from '#client/api/call.ts';
import { Button } from '#client/ui/button.tsx';
import { Dialog } from '#client/ui/dialog.tsx';
import { MoneyField, TextAreaField } from '#client/ui/fields.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { Money } from '#client/ui/money.tsx';
import { DefinitionRows, Section } from '#client/ui/page.tsx';
import { useSite } from '#client/ui/site.tsx';
import { StateWord } from '#client/ui/states.tsx';
import { Tie } from '#client/ui/tie.tsx';
import { closeTill, explainTill, openTill, type TillView } from '#contract/tills';
import type { Minor } from '#domain/money/index';
import { formatTime } from '#domain/time/index';
import { type Answer, type Session, useMayRun, useTillChange } from './till-changes.ts';
import { CountTill, MoveCash } from './till-dialogs.tsx';

/** A till with its shifts of the day, from float to close. */
export function TillSection({ till, answer }: { readonly till: TillView; readonly answer: Answer }) {
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
