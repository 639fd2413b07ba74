import type { ReactNode } from 'react';
import { Link, useSearchParams } from 'react-router-dom';
import { useSession } from '#client/api/session.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { useSite } from '#client/ui/site.tsx';
import type { QuoteView } from '#contract/quotes';
import { optionLetter } from '#domain/quotes/index';
import { dayOf, formatDay } from '#domain/time/index';
import { useSendAgain } from './queries.ts';

/** What a person does next with this quote, rather than what state it is in. */
export function NextStep({
  quote,
  mayWrite,
  onAccept,
  onWithdraw,
}: {
  readonly quote: QuoteView;
  readonly mayWrite: boolean;
  readonly onAccept: () => void;
  readonly onWithdraw: (() => void) | undefined;
}) {
  const { person } = useSession();
  const mayAccept = person?.roles.some((role) => role !== 'surgeon' && role !== 'auditor') ?? false;
  const estimate =
    quote.versions[0]?.options.every((option) => option.priced.standing === 'estimate') ?? false;
  return (
    <div className="mb-6 flex flex-wrap items-center justify-between gap-4 border-y border-rule py-3">
      <div className="max-w-prose">
        <Words quote={quote} />
      </div>
      <div className="flex flex-wrap items-center gap-3">
        {quote.state === 'issued' && mayAccept && !estimate ? (
          <Button kind="primary" onPress={onAccept}>
            Accept at the desk
          </Button>
        ) : null}
        {mayWrite ? <Again quote={quote} /> : null}
        {onWithdraw ? (
          <Button kind="quiet" onPress={onWithdraw}>
            Withdraw
          </Button>
        ) : null}
      </div>
    </div>
  );
}

function Again({ quote }: { readonly quote: QuoteView }) {
  const announce = useAnnounce();
  const [, setSearch] = useSearchParams();
  const send = useSendAgain();
  const edit = (): void => setSearch({ edit: '1' });
  if (quote.state === 'lapsed' || quote.state === 'issued') {
    return (
      <>
        {quote.state === 'issued' && quote.patient.email ? (
          <Button
            sending={send.isPending}
            onPress={() =>
              send.mutate(quote.quoteId, {
                onSuccess: () =>
                  announce(`Sent again to ${quote.patient.email}. Links sent before no longer work.`),
                onError: (error) => announce(error.message),
              })
            }
          >
            Send again
          </Button>
        ) : null}
        <Button kind={quote.state === 'lapsed' ? 'primary' : 'secondary'} onPress={edit}>
          {quote.state === 'lapsed' ? 'Renew it' : 'Change it'}
        </Button>
      </>
    );
  }
  return null;
}

function Words({ quote }: { readonly quote: QuoteView }): ReactNode {
  const { zone } = useSite();
  const [version] = quote.versions;
  const link = quote.links.find((each) => each.works);
  if (quote.state === 'accepted' && quote.acceptance) {
    const { acceptance } = quote;
    return (
      <>
        Option {optionLetter(acceptance.optionNo - 1)} was accepted on {formatDay(acceptance.acceptedOn)}{' '}
        {acceptance.channel === 'link'
          ? `by ${acceptance.typedName} through the link`
          : `at the desk by ${acceptance.typedName}, recorded by ${acceptance.recordedBy}`}
        . {quote.courseId ? <Link to={`/courses/${quote.courseId}`}>Go to the course of care</Link> : null}
      </>
    );
  }
  if (quote.state === 'withdrawn')
    return <>Withdrawn: {quote.withdrawnReason}. A new quote begins on the patient’s page.</>;
  if (quote.state === 'lapsed' && version)
    return (
      <>It was good until {formatDay(version.validUntil)}. Renew it at today’s prices and send it anew.</>
    );
  if (!version) return <>Still a draft.</>;
  const opened = link?.lastOpenedAt
    ? `last opened by the patient on ${formatDay(dayOf(link.lastOpenedAt, zone))}`
    : link
      ? `sent to ${link.sentTo ?? 'the patient'}, not opened yet`
      : 'no link is out';
  return (
    <>
      Good until {formatDay(version.validUntil)}; {opened}.
      {version.options.every((option) => option.priced.standing === 'estimate')
        ? ' An estimate: once the surgeon has approved a plan, change it and send it anew.'
        : ''}
      {quote.draftDiffers ? ' The draft has changes that were not sent.' : ''}
    </>
  );
}
