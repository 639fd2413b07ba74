import { useState } from 'react';
import type { ProblemError } from '#client/api/problem-error.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { Dialog } from '#client/ui/dialog.tsx';
import { SelectField, TextField } from '#client/ui/fields.tsx';
import { moneyText } from '#client/ui/money.tsx';
import type { QuoteVersionView, QuoteView } from '#contract/quotes';
import { optionLetter } from '#domain/quotes/index';
import { formatDay } from '#domain/time/index';
import { useAcceptAtDesk } from './queries.ts';

/** The patient accepts at the desk on a signed form: the option, the name, and where the form is kept. */
export function AcceptanceDialog({
  quote,
  version,
  onClose,
}: {
  readonly quote: QuoteView;
  readonly version: QuoteVersionView;
  readonly onClose: () => void;
}) {
  const accept = useAcceptAtDesk();
  const announce = useAnnounce();
  const [optionNo, setOptionNo] = useState('1');
  const [typedName, setTypedName] = useState('');
  const [signedForm, setSignedForm] = useState(`Paper file, signed on ${formatDay(quote.today)}`);
  const problem = accept.error as ProblemError | null;
  return (
    <Dialog title={`Accept quote ${quote.number} at the desk`} open onClose={onClose}>
      <form
        onSubmit={(event) => {
          event.preventDefault();
          accept.mutate(
            {
              params: { quoteId: quote.quoteId },
              body: {
                quoteVersionId: version.quoteVersionId,
                optionNo: Number.parseInt(optionNo, 10),
                typedName,
                signedForm,
              },
            },
            {
              onSuccess: () => {
                announce('Accepted. The course of care is open.');
                onClose();
              },
            },
          );
        }}
        className="grid gap-4"
      >
        <SelectField
          label="Option"
          value={optionNo}
          onChange={setOptionNo}
          error={problem?.fieldMessage('optionNo')}
          choices={version.options.map((option, index) => ({
            value: String(index + 1),
            label: `${optionLetter(index)}, ${option.label}, ${moneyText(option.priced.totalMinor, option.priced.currency, true)}`,
          }))}
        />
        <TextField
          label="Name as signed"
          value={typedName}
          onChange={setTypedName}
          error={problem?.fieldMessage('typedName')}
          autoComplete="off"
          required
        />
        <TextField
          label="Where the signed form is kept"
          value={signedForm}
          onChange={setSignedForm}
          error={problem?.fieldMessage('signedForm')}
          required
        />
        {problem && problem.fields.length === 0 ? (
          <p role="alert" className="font-semibold text-bengal">
            {problem.message}
          </p>
        ) : null}
        <div className="mt-2 flex flex-wrap gap-3">
          <Button kind="primary" type="submit" sending={accept.isPending}>
            Accept
          </Button>
          <Button kind="quiet" onPress={onClose}>
            Leave it
          </Button>
        </div>
      </form>
    </Dialog>
  );
}
