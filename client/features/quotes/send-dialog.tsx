import { type QueryClient, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { useSearchParams } from 'react-router-dom';
import type { ProblemError } from '#client/api/problem-error.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { Dialog } from '#client/ui/dialog.tsx';
import { TextAreaField } from '#client/ui/fields.tsx';
import { Money } from '#client/ui/money.tsx';
import type { QuoteView } from '#contract/quotes';
import type { PriceBook, PricedCourse, QuoteResult } from '#domain/pricing/index';
import { optionLetter, optionWords } from '#domain/quotes/index';
import { formatDay } from '#domain/time/index';
import { quoteQuery, useAskApproval, useIssueQuote } from './queries.ts';
import type { DraftDesk } from './use-draft.ts';

interface SendProps {
  readonly quote: QuoteView;
  readonly desk: DraftDesk;
  readonly book: PriceBook;
  readonly results: readonly QuoteResult[];
  readonly onClose: () => void;
}

/** Says once more what goes to whom; then the server prices anew and freezes what was seen. */
export function SendDialog(props: SendProps) {
  const { quote, results, onClose } = props;
  const unpriced = results.findIndex((result) => !result.ok);
  if (unpriced >= 0) {
    return (
      <Dialog title="Not ready to send" open onClose={onClose}>
        <p>
          Option {optionLetter(unpriced)} cannot be priced yet. What is missing is marked at its field; the
          draft is kept.
        </p>
        <div className="mt-6">
          <Button kind="primary" onPress={onClose}>
            Back to the draft
          </Button>
        </div>
      </Dialog>
    );
  }
  const courses = results.flatMap((result) => (result.ok ? [result.course] : []));
  const [first] = courses;
  return (
    <Dialog title={`Send quote ${quote.number}`} open onClose={onClose}>
      <ul>
        {courses.map((course, index) => (
          <li key={optionLetter(index)} className="flex justify-between gap-4 border-b border-rule py-2">
            <span>
              Option {optionLetter(index)}, {wordsOf(props, index)}
              {course.standing === 'estimate' ? <span className="text-povidone"> · estimate</span> : null}
            </span>
            <span className="font-extrabold">
              <Money amount={course.totalMinor} currency={course.currency} alone />
            </span>
          </li>
        ))}
      </ul>
      {first ? <p className="mt-3 text-soft">Good until {formatDay(first.validUntil)}.</p> : null}
      {courses.some((course) => course.standing === 'estimate') ? (
        <p className="mt-3 font-semibold text-povidone">
          An estimate, subject to assessment: the patient can read it, and accept once the surgeon has
          approved a plan.
        </p>
      ) : null}
      <Act {...props} courses={courses} />
    </Dialog>
  );
}

function wordsOf({ desk, book }: SendProps, index: number): string {
  const option = desk.draft.options[index];
  return option ? optionWords(option, book).replace(/^./, (letter) => letter.toLowerCase()) : '';
}

function Act(props: SendProps & { readonly courses: readonly PricedCourse[] }) {
  const needed = props.courses.flatMap((course) => course.approvals);
  const { approval } = props.quote;
  if (needed.length > 0 && approval?.state !== 'approved') return <AskApproval {...props} />;
  return <Send {...props} />;
}

function Send({ quote, desk, courses, onClose }: SendProps & { readonly courses: readonly PricedCourse[] }) {
  const announce = useAnnounce();
  const client = useQueryClient();
  const issue = useIssueQuote();
  const [, setSearch] = useSearchParams();
  const [refused, setRefused] = useState<string>();
  const [saving, setSaving] = useState(false);
  const { email } = quote.patient;
  const send = async (withoutMail: boolean): Promise<void> => {
    setSaving(true);
    setRefused(undefined);
    const fresh = await readySince(client, desk, quote, courses);
    setSaving(false);
    if (typeof fresh === 'string') return setRefused(fresh);
    const options = courses.map((course, index) => {
      const price = fresh.prices[index];
      return { totalMinor: course.totalMinor, contentHash: price?.ok ? price.contentHash : NO_HASH };
    });
    issue.mutate(
      {
        params: { quoteId: quote.quoteId },
        body: { draftVersion: fresh.draftVersion, options, withoutMail },
      },
      {
        onSuccess: () => {
          announce(withoutMail || email === null ? 'Quote issued.' : `Quote sent to ${email}.`);
          setSearch({});
          onClose();
        },
        onError: (error) => setRefused(error.message),
      },
    );
  };
  return (
    <>
      <p className="mt-3">
        {email === null ? (
          <>
            The patient has no e-mail address. The quote can be issued without mail and handed over on paper.
          </>
        ) : (
          <>
            A mail with the quote and a private link goes to <strong>{email}</strong>.
          </>
        )}
      </p>
      {refused ? (
        <p role="alert" className="mt-4 font-semibold text-bengal">
          {refused}
        </p>
      ) : null}
      <div className="mt-6 flex flex-wrap gap-3">
        {email === null ? null : (
          <Button kind="primary" sending={issue.isPending || saving} onPress={() => void send(false)}>
            Send
          </Button>
        )}
        <Button
          kind={email === null ? 'primary' : 'secondary'}
          disabled={issue.isPending || saving}
          onPress={() => void send(true)}
        >
          Issue without mail
        </Button>
        <Button kind="quiet" onPress={onClose}>
          Leave it
        </Button>
      </div>
    </>
  );
}

const NO_HASH = '0'.repeat(64);

/**
 * The quote as the server has it now, once the draft is saved and nothing that the price depends on has moved since it was shown;
 * else why not.
 */
async function readySince(
  client: QueryClient,
  desk: DraftDesk,
  shown: QuoteView,
  courses: readonly PricedCourse[],
): Promise<QuoteView | string> {
  const saved = await desk.flush();
  if (saved === undefined)
    return 'The draft could not be saved, so nothing was sent. Close this and look at the sheet.';
  const fresh = await client.fetchQuery({ ...quoteQuery(shown.quoteId), staleTime: 0 });
  const moved =
    fresh.draftVersion !== saved ||
    fresh.today !== shown.today ||
    fresh.plan?.approvedPlanId !== shown.plan?.approvedPlanId ||
    fresh.prices.some((price, index) => price.ok && price.bookVersion !== courses[index]?.book.version);
  if (!moved) return fresh;
  await client.invalidateQueries({ queryKey: ['pricing-book'] });
  return 'The draft, the plan, the price book or the day has changed meanwhile. Look at the new figures, then send.';
}

/** A discount over one's own limit: another person agrees first. */
function AskApproval({
  quote,
  desk,
  courses,
  onClose,
}: SendProps & { readonly courses: readonly PricedCourse[] }) {
  const announce = useAnnounce();
  const client = useQueryClient();
  const ask = useAskApproval();
  const [reason, setReason] = useState('');
  const [refused, setRefused] = useState<string>();
  const { approval } = quote;
  const over = courses.flatMap((course) => course.approvals);
  const send = async (): Promise<void> => {
    const saved = await desk.flush();
    if (saved === undefined) return setRefused('The draft could not be saved, so nothing was asked.');
    ask.mutate(
      { params: { quoteId: quote.quoteId }, body: { draftVersion: saved, reason } },
      {
        onSuccess: () => {
          announce('A manager was asked to approve the discount.');
          onClose();
        },
        onError: (error) => setRefused(error.message),
      },
    );
  };
  return (
    <div className="mt-4 border-t border-rule pt-4">
      {over.map((each) => (
        <p key={each.discountId}>
          {each.reason} of {each.asked} is over your limit of {each.ownLimit}.
        </p>
      ))}
      {approval?.state === 'asked' ? (
        <>
          <p className="mt-2 font-semibold text-povidone">
            Asked by {approval.requestedBy}, waiting for a manager.
          </p>
          <div className="mt-6 flex flex-wrap gap-3">
            <Button onPress={() => void client.invalidateQueries(quoteQuery(quote.quoteId))}>
              Look again
            </Button>
            <Button kind="quiet" onPress={onClose}>
              Leave it
            </Button>
          </div>
        </>
      ) : (
        <>
          {approval?.state === 'refused' ? (
            <p className="mt-2 font-semibold text-bengal">
              Refused by {approval.decidedBy}
              {approval.decisionNote ? `: ${approval.decisionNote}` : ''}
            </p>
          ) : null}
          <TextAreaField
            label="Why it should be given"
            value={reason}
            onChange={setReason}
            className="mt-3"
            error={(ask.error as ProblemError | null)?.fieldMessage('reason')}
          />
          {refused ? (
            <p role="alert" className="mt-3 font-semibold text-bengal">
              {refused}
            </p>
          ) : null}
          <div className="mt-6 flex flex-wrap gap-3">
            <Button kind="primary" sending={ask.isPending} onPress={() => void send()}>
              Ask a manager
            </Button>
            <Button kind="quiet" onPress={onClose}>
              Leave it
            </Button>
          </div>
        </>
      )}
    </div>
  );
}
