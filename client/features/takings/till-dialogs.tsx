import { useState } from 'react';
import { call } from '#client/api/call.ts';
import { Button } from '#client/ui/button.tsx';
import { MoneyField, SelectField, TextField } from '#client/ui/fields.tsx';
import { Money } from '#client/ui/money.tsx';
import { countTill, moveTillCash } from '#contract/tills';
import { formatAmount, type Minor, minor } from '#domain/money/index';
import { type Answer, type Session, useTillChange } from './till-changes.ts';

/** Cash leaves an open till. */
export function MoveCash({
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
export function CountTill({
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
