import { useState } from 'react';
import { Link, useSearchParams } from 'react-router-dom';
import { Button, LinkButton } from '#client/ui/button.tsx';
import { EyeColumns } from '#client/ui/eye-columns.tsx';
import { TextField } from '#client/ui/fields.tsx';
import { MarginNote } from '#client/ui/margin.tsx';
import { Page } from '#client/ui/page.tsx';
import { PrescriptionFields } from '#client/ui/prescription-fields.tsx';
import { useSite } from '#client/ui/site.tsx';
import type { QuoteView } from '#contract/quotes';
import type { PriceBook, QuoteResult } from '#domain/pricing/index';
import {
  MOST_OPTIONS,
  type OptionDraft,
  optionLetter,
  optionWords,
  type QuoteDraft,
} from '#domain/quotes/index';
import { formatDay, formatTime } from '#domain/time/index';
import { addOption, changeOption, removeOption, typePrescription } from './edit-draft.ts';
import { EyeWishes } from './eye-wishes.tsx';
import { fieldErrors } from './field-errors.ts';
import { OptionSettings } from './option-settings.tsx';
import { OptionStrip, stripOptions, useChosenOption } from './option-strip.tsx';
import { PricedTable } from './priced-table.tsx';
import { SaveConflict } from './save-conflict.tsx';
import { SendDialog } from './send-dialog.tsx';
import { Terms } from './terms.tsx';
import { type DraftDesk, useDraft } from './use-draft.ts';
import { usePrices } from './use-prices.ts';

const CAUTION = (
  <>
    <p className="font-semibold text-ink">Caution</p>
    <p className="mt-1">
      Whether an eye may be treated is the surgeon’s decision. This page only prices the approved plan.
    </p>
  </>
);

/** A quote being written: typed on the left of the reader's right eye, priced while typing, saved by itself. */
export function DraftSheet({
  quote,
  draft: initial,
  book,
}: {
  readonly quote: QuoteView;
  readonly draft: QuoteDraft;
  readonly book: PriceBook;
}) {
  const desk = useDraft(quote, initial);
  const { draft } = desk;
  const chosen = useChosenOption(draft.options.length);
  const [search, setSearch] = useSearchParams();
  const results = usePrices(quote, draft, book);
  const option = draft.options[chosen];
  const result = results[chosen];
  const [sending, setSending] = useState(false);
  const choose = (index: number): void =>
    setSearch(
      (before) => {
        const next = new URLSearchParams(before);
        next.set('option', optionLetter(index));
        return next;
      },
      { replace: true },
    );
  return (
    <Page
      title={`${quote.patient.givenName} ${quote.patient.familyName}`}
      over={<SavedWords quote={quote} desk={desk} />}
      lead={<PatientWords quote={quote} />}
      actions={
        <>
          <LinkButton to={`/quotes/${quote.quoteId}/preview?${search.toString()}`}>
            Preview as patient
          </LinkButton>
          <Button kind="primary" onPress={() => setSending(true)}>
            {quote.versions.length > 0 ? 'Send new version' : 'Send quote'}
          </Button>
        </>
      }
    >
      {desk.state === 'conflict' ? <SaveConflict desk={desk} /> : null}
      <Eyes draft={draft} result={result} desk={desk} />
      <OptionStrip options={stripOptions(draft.options, results, book)} chosen={chosen} />
      {option && result ? (
        <OneOption
          quote={quote}
          option={option}
          result={result}
          book={book}
          letter={optionLetter(chosen)}
          onChange={(next) => desk.change(changeOption(draft, chosen, next))}
          many={draft.options.length > 1}
          onAdd={
            draft.options.length < MOST_OPTIONS
              ? () => {
                  desk.change(addOption(draft, chosen));
                  choose(draft.options.length);
                }
              : undefined
          }
          onRemove={
            draft.options.length > 1
              ? () => {
                  desk.change(removeOption(draft, chosen));
                  choose(Math.max(0, chosen - 1));
                }
              : undefined
          }
        />
      ) : null}
      <MarginNote>{CAUTION}</MarginNote>
      {sending ? (
        <SendDialog
          quote={quote}
          desk={desk}
          book={book}
          results={results}
          onClose={() => setSending(false)}
        />
      ) : null}
    </Page>
  );
}

function SavedWords({ quote, desk }: { readonly quote: QuoteView; readonly desk: DraftDesk }) {
  const { zone } = useSite();
  const words = {
    saved: `saved ${formatTime(desk.savedAt, zone)}`,
    unsaved: 'not saved yet',
    saving: 'saving…',
    failed: `not saved: ${desk.problem?.message ?? 'the server cannot be reached'}`,
    conflict: 'not saved: somebody else has',
  }[desk.state];
  return (
    <span>
      Quote {quote.number}, draft {desk.version} ·{' '}
      <span
        className={desk.state === 'failed' || desk.state === 'conflict' ? 'font-semibold text-bengal' : ''}
        role="status"
      >
        {words}
      </span>
    </span>
  );
}

function PatientWords({ quote }: { readonly quote: QuoteView }) {
  const { plan, patient } = quote;
  return (
    <>
      born {formatDay(patient.bornOn)} ·{' '}
      {plan ? (
        plan.good ? (
          `plan approved by ${plan.surgeonName} on ${formatDay(plan.approvedOn)}, good until ${formatDay(plan.expiresOn)}`
        ) : (
          <span className="font-semibold text-povidone">
            the plan of {plan.surgeonName} ended on {formatDay(plan.expiresOn)}
          </span>
        )
      ) : (
        <span className="font-semibold text-povidone">
          no approved plan: an estimate, subject to assessment
        </span>
      )}{' '}
      · <Link to={`/patients/${patient.patientId}`}>patient’s page</Link>
    </>
  );
}

function Eyes({
  draft,
  result,
  desk,
}: {
  readonly draft: QuoteDraft;
  readonly result: QuoteResult | undefined;
  readonly desk: DraftDesk;
}) {
  const errors = fieldErrors(result && !result.ok ? result.refusals : []);
  return (
    <EyeColumns>
      {(eye) => (
        <PrescriptionFields
          typed={draft.prescriptions[eye]}
          onType={(field, text) => desk.change(typePrescription(draft, eye, field, text))}
          errors={priceErrors(errors, eye, draft)}
        />
      )}
    </EyeColumns>
  );
}

/** What the engine says of a prescription that reads well: no band for it. What does not read, the fields say themselves. */
function priceErrors(errors: ReturnType<typeof fieldErrors>, eye: 'OD' | 'OS', draft: QuoteDraft) {
  const typed = draft.prescriptions[eye];
  if (typed.sphere.trim() === '') return {};
  const at = (field: string) => {
    const words = errors.at(`eyes.${eye}.prescription.${field}`);
    return words?.startsWith('The price book') ? words : undefined;
  };
  const [sphere, cylinder] = [at('sphere'), at('cylinder')];
  return { ...(sphere ? { sphere } : {}), ...(cylinder ? { cylinder } : {}) };
}

const SHOWN = ['eyes.', 'surgery.on', 'packageId', 'priceListId', 'paymentPlanId', 'addOns', 'discounts'];

function OneOption({
  quote,
  option,
  result,
  book,
  letter,
  onChange,
  many,
  onAdd,
  onRemove,
}: {
  readonly quote: QuoteView;
  readonly option: OptionDraft;
  readonly result: QuoteResult;
  readonly book: PriceBook;
  readonly letter: string;
  readonly onChange: (next: OptionDraft) => void;
  readonly many: boolean;
  readonly onAdd: (() => void) | undefined;
  readonly onRemove: (() => void) | undefined;
}) {
  const errors = fieldErrors(result.ok ? [] : result.refusals);
  const words = optionWords(option, book).replace(/^./, (first) => first.toLowerCase());
  return (
    <>
      <EyeWishes
        option={option}
        book={book}
        plan={quote.plan}
        errors={errors}
        onChange={onChange}
        disabled={false}
      />
      <OptionSettings option={option} book={book} errors={errors} onChange={onChange} disabled={false} />
      <div className="flex flex-wrap items-end justify-between gap-4">
        {many ? (
          <TextField
            label={`Name of option ${letter}`}
            value={option.label}
            maxLength={80}
            placeholder={optionWords({ ...option, label: '' }, book)}
            className="w-full max-w-xs"
            onChange={(label) => onChange({ ...option, label })}
          />
        ) : null}
        <div className="ml-auto flex flex-wrap gap-4">
          {onAdd ? (
            <Button kind="quiet" onPress={onAdd}>
              Add an option beside it
            </Button>
          ) : null}
          {onRemove ? (
            <Button kind="quiet" onPress={onRemove}>
              Take option {letter} out
            </Button>
          ) : null}
        </div>
      </div>
      {result.ok ? (
        <>
          <PricedTable course={result.course} title={`Option ${letter}, ${words}`} />
          <Terms course={result.course} />
        </>
      ) : (
        <div role="status" className="mt-4 border-y border-rule py-4">
          <p className="font-semibold">
            {result.refusals.length === 1
              ? 'One thing is missing before this can be priced'
              : `${result.refusals.length} things are missing before this can be priced`}
          </p>
          <ul className="mt-1 text-soft">
            {result.refusals.map((refusal) => (
              <li key={`${refusal.field}-${refusal.code}`}>
                {refusal.words} {refusal.change}
              </li>
            ))}
          </ul>
          {errors.rest(SHOWN).length > 0 ? null : (
            <p className="mt-1 text-small text-soft">
              {result.refusals.length === 1 ? 'It is marked at its field.' : 'Each is marked at its field.'}
            </p>
          )}
        </div>
      )}
    </>
  );
}
