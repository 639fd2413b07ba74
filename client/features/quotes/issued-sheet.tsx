import { useState } from 'react';
import { Link, useSearchParams } from 'react-router-dom';
import { LinkButton } from '#client/ui/button.tsx';
import { EyeColumns } from '#client/ui/eye-columns.tsx';
import { moneyText } from '#client/ui/money.tsx';
import { Page } from '#client/ui/page.tsx';
import { Caution, EmptyState, StateWord } from '#client/ui/states.tsx';
import type { QuoteVersionView, QuoteView } from '#contract/quotes';
import { formatPower, formatPrescription, strongestMeridianMd, transpose } from '#domain/prescription/index';
import { optionLetter } from '#domain/quotes/index';
import { formatDay } from '#domain/time/index';
import { AcceptanceDialog } from './acceptance-dialog.tsx';
import { HistorySection } from './history-section.tsx';
import { NextStep } from './next-step.tsx';
import { OptionStrip, useChosenOption } from './option-strip.tsx';
import { PricedTable } from './priced-table.tsx';
import { Terms } from './terms.tsx';
import { WithdrawDialog } from './withdraw-dialog.tsx';
import { STATE } from './words.ts';

/** A quote as it went out: frozen, with its state, what can be done next, and everything that happened to it. */
export function IssuedSheet({ quote, mayWrite }: { readonly quote: QuoteView; readonly mayWrite: boolean }) {
  const [search] = useSearchParams();
  const wanted = Number(search.get('version'));
  const version = quote.versions.find((each) => each.versionNo === wanted) ?? quote.versions[0];
  const [asking, setAsking] = useState<'accept' | 'withdraw' | null>(null);
  const open = quote.state === 'issued' || quote.state === 'lapsed' || quote.state === 'draft';
  return (
    <Page
      title={`${quote.patient.givenName} ${quote.patient.familyName}`}
      over={
        <>
          Quote {quote.number}
          {version ? `, version ${version.versionNo}` : ''} ·{' '}
          <StateWord tone={STATE[quote.state].tone}>{STATE[quote.state].words}</StateWord>
        </>
      }
      lead={
        <>
          born {formatDay(quote.patient.bornOn)}
          {version
            ? ` · issued by ${version.issuedBy} on ${formatDay(version.issuedOn)}, price book ${version.priceBookVersion}`
            : ''}{' '}
          · <Link to={`/patients/${quote.patient.patientId}`}>patient’s page</Link>
        </>
      }
      actions={
        version ? (
          <LinkButton to={`/quotes/${quote.quoteId}/preview?${search.toString()}`}>
            Preview as patient
          </LinkButton>
        ) : null
      }
    >
      <NextStep
        quote={quote}
        mayWrite={mayWrite}
        onAccept={() => setAsking('accept')}
        onWithdraw={open && mayWrite ? () => setAsking('withdraw') : undefined}
      />
      {version ? (
        <Version quote={quote} version={version} />
      ) : (
        <EmptyState title="Not sent yet">
          A counsellor is still writing this quote; nothing has been issued.
        </EmptyState>
      )}
      <HistorySection quote={quote} mayWrite={mayWrite} />
      <Caution>
        Whether an eye may be treated is the surgeon’s decision. Tax, credit and consumer terms follow local
        law.
      </Caution>
      {asking === 'accept' && quote.versions[0] ? (
        <AcceptanceDialog quote={quote} version={quote.versions[0]} onClose={() => setAsking(null)} />
      ) : null}
      {asking === 'withdraw' ? <WithdrawDialog quote={quote} onClose={() => setAsking(null)} /> : null}
    </Page>
  );
}

function Version({ quote, version }: { readonly quote: QuoteView; readonly version: QuoteVersionView }) {
  const accepted = quote.acceptance?.versionNo === version.versionNo ? quote.acceptance.optionNo - 1 : null;
  const asked = useChosenOption(version.options.length);
  const [search] = useSearchParams();
  const chosen = search.get('option') === null && accepted !== null ? accepted : asked;
  const option = version.options[chosen];
  if (!option) return null;
  return (
    <>
      {quote.versions[0] !== version ? (
        <p className="mb-4 font-semibold text-povidone">
          This is version {version.versionNo}; there is a newer one.{' '}
          <Link to="?">Look at version {quote.versions[0]?.versionNo}</Link>
        </p>
      ) : null}
      <EyeColumns>{(eye) => <IssuedEye option={option} eye={eye} />}</EyeColumns>
      {version.options.length > 1 ? (
        <OptionStrip
          chosen={chosen}
          options={version.options.map((each, index) => ({
            words: index === accepted ? `${each.label}, accepted` : each.label,
            total: moneyText(each.priced.totalMinor, each.priced.currency),
          }))}
        />
      ) : null}
      <PricedTable
        course={option.priced}
        title={`Option ${optionLetter(chosen)}, ${option.label.replace(/^./, (letter) => letter.toLowerCase())}`}
      />
      <Terms course={option.priced} />
    </>
  );
}

function IssuedEye({
  option,
  eye,
}: {
  readonly option: QuoteVersionView['options'][number];
  readonly eye: 'OD' | 'OS';
}) {
  const wish = option.input.eyes[eye];
  if (!wish) return <p className="text-soft">This eye is not treated.</p>;
  const line = option.priced.lines.find((each) => each.kind === 'procedure' && each.laterality === eye);
  const surgery = option.priced.obligations.find(
    (each) => each.kind === 'surgery' && each.laterality === eye,
  );
  const other = transpose(wish.prescription);
  const { surgery: plan } = option.input;
  const on = plan.plan === 'staged' ? plan.on[eye] : plan.on;
  return (
    <>
      <p className="tabular text-lead font-extrabold">{formatPrescription(wish.prescription)}</p>
      <p className="tabular text-small text-soft">
        {other === wish.prescription ? '' : `also ${formatPrescription(other)} · `}strongest meridian{' '}
        {formatPower(strongestMeridianMd(wish.prescription))}
      </p>
      <p className="mt-2">
        {line?.detail ?? surgery?.label ?? wish.procedureId}
        <span className="text-soft">{on ? `, on ${formatDay(on)}` : ', no day yet'}</span>
      </p>
    </>
  );
}
