import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { call } from '#client/api/call.ts';
import { ProblemError } from '#client/api/problem-error.ts';
import { Button } from '#client/ui/button.tsx';
import { CheckField, TextField } from '#client/ui/fields.tsx';
import { moneyText } from '#client/ui/money.tsx';
import { acceptMyQuote, type PatientQuote } from '#contract/portal';
import { payNow } from './pay-now.ts';
import { myQuoteQuery } from './queries.ts';

const TICKS = [
  'I have read what is and is not included.',
  'I have read what comes back if plans change.',
] as const;

/** Accept by typing one's name; then on to the card page for the deposit. */
export function AcceptForm({
  quote,
  option,
}: {
  readonly quote: PatientQuote;
  readonly option: PatientQuote['options'][number];
}) {
  const client = useQueryClient();
  const [name, setName] = useState('');
  const [ticked, setTicked] = useState<readonly boolean[]>(TICKS.map(() => false));
  const [tried, setTried] = useState(false);
  const accept = useMutation({
    mutationFn: async () => {
      const accepted = await call(acceptMyQuote, {
        body: {
          quoteVersionId: quote.quoteVersionId,
          optionNo: option.optionNo,
          typedName: name.trim(),
          ticks: [...TICKS],
        },
      });
      client.setQueryData(myQuoteQuery.queryKey, accepted);
      await payNow('deposit', option.depositMinor);
    },
  });
  if (option.standing === 'estimate') return null;
  const allTicked = ticked.every(Boolean);
  const problem = accept.error instanceof ProblemError ? accept.error : undefined;
  return (
    <form
      className="mt-8 grid gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        setTried(true);
        if (name.trim() !== '' && allTicked) accept.mutate();
      }}
    >
      {TICKS.map((words, index) => (
        <CheckField
          key={words}
          label={words}
          checked={ticked[index] ?? false}
          onChange={(checked) =>
            setTicked((before) => before.map((each, at) => (at === index ? checked : each)))
          }
          error={tried && !ticked[index] ? 'Please tick this to go on.' : undefined}
        />
      ))}
      <TextField
        label="Your full name, typed"
        hint="It stands for your signature."
        autoComplete="name"
        value={name}
        onChange={setName}
        error={tried && name.trim() === '' ? 'Please type your name.' : problem?.fieldMessage('typedName')}
      />
      {problem ? (
        <p role="alert" className="font-semibold text-bengal">
          {problem.message}
        </p>
      ) : null}
      <Button kind="primary" type="submit" sending={accept.isPending} className="min-h-13 w-full text-lead">
        Accept and pay {moneyText(option.depositMinor, quote.currency, true)}
      </Button>
      <p className="text-small text-soft">You pay on our card partner’s page. We never see your card.</p>
    </form>
  );
}
