import type { ReactNode } from 'react';
import { Money, moneyText } from '#client/ui/money.tsx';
import { PairMark } from '#client/ui/pair-mark.tsx';
import type { PatientQuote } from '#contract/portal';
import { type ClinicDate, formatDay, formatDayShort, formatDayWithWeekday } from '#domain/time/index';

type Option = PatientQuote['options'][number];

/** One option in plain words: price, each eye, what is included, when to pay, what comes back. */
export function OptionView({ option, currency }: { readonly option: Option; readonly currency: string }) {
  const shared = option.totalMinor - option.eyes.reduce((sum, eye) => sum + eye.shareMinor, 0);
  return (
    <>
      <p className="mt-1 text-soft">{whenWords(option)}</p>
      <p className="tabular mt-4 text-figure font-extrabold">
        {moneyText(option.totalMinor, currency, true)}
      </p>
      <p className="text-small text-soft">
        for everything below, {option.taxWords}. Nothing is added later unless you ask for it.
      </p>
      {option.standing === 'estimate' ? (
        <p className="mt-3 font-semibold text-povidone">
          An estimate, subject to assessment: it can be accepted once your surgeon has approved it.
        </p>
      ) : null}
      <div className="mt-5 grid grid-cols-2 border-t-2 border-ink">
        {(['OD', 'OS'] as const).map((side, index) => {
          const eye = option.eyes.find((each) => each.eye === side);
          return (
            <section
              key={side}
              aria-label={side === 'OD' ? 'Right eye' : 'Left eye'}
              className={`py-4 ${index === 1 ? 'border-l border-ink pl-4' : 'pr-4'}`}
            >
              <h2 className="flex items-center gap-2">
                {eye ? (
                  <PairMark eyes={[{ eye: side, state: 'planned', money: 'none' }]} only={side} />
                ) : null}
                {side === 'OD' ? 'Right' : 'Left'}
              </h2>
              {eye ? (
                <>
                  <p className="mt-1">{eye.procedure}</p>
                  <p className="tabular font-extrabold">{moneyText(eye.shareMinor, currency, true)}</p>
                </>
              ) : (
                <p className="mt-1 text-soft">not treated</p>
              )}
            </section>
          );
        })}
      </div>
      <Rows
        rows={[
          ...(shared > 0
            ? [
                {
                  key: 'shared',
                  label: 'For both eyes together',
                  value: <Money amount={shared} currency={currency} />,
                },
              ]
            : []),
          ...option.included.map((words) => ({ key: words, label: words, value: 'included' })),
        ]}
      />
      {option.notIncluded.length > 0 ? (
        <p className="border-b border-rule py-2 text-small text-soft">
          Not included: {option.notIncluded.join(', ')}
        </p>
      ) : null}
      <h2 className="mt-8">What you pay, and when</h2>
      <Rows
        rows={option.schedule.map((due, index) => ({
          key: `${due.label}-${index}`,
          label: dueWords(due.label, due.dueOn, index),
          note: due.detail,
          value: <Money amount={due.amountMinor} currency={currency} />,
        }))}
      />
      <h2 className="mt-8">If you change your mind</h2>
      <Rows
        rows={option.cancellation.map((row, index) => ({
          key: `${row.event}-${index}`,
          label: row.until === null ? row.label : `${row.label}, until ${formatDayShort(row.until)}`,
          note: row.detail,
          value:
            row.comesBackMinor === null || row.keptMinor === 0
              ? 'all comes back'
              : `${moneyText(row.comesBackMinor, currency)} comes back`,
        }))}
      />
      {option.cover.length > 0 ? (
        <>
          <h2 className="mt-8">If you need a second treatment</h2>
          {option.cover.map((cover) => (
            <p key={cover.eye} className="border-b border-rule py-2 text-small">
              <span className="font-semibold">{cover.eye === 'OD' ? 'Right eye' : 'Left eye'}</span>: included{' '}
              {cover.until === null ? `for ${cover.months} months` : `until ${formatDay(cover.until)}`}.{' '}
              {cover.conditions.join('; ')}.
            </p>
          ))}
        </>
      ) : null}
    </>
  );
}

function whenWords(option: Option): string {
  const [first, second] = option.surgeryOn;
  if (!first) return option.label;
  if (first.on === null) return `${option.label}, on a day we agree with you`;
  if (second?.on && second.on !== first.on)
    return `${option.label}: ${formatDayWithWeekday(first.on)} and ${formatDayWithWeekday(second.on)}`;
  return `${option.label}, ${formatDayWithWeekday(first.on)}`;
}

function dueWords(label: string, dueOn: ClinicDate | null, index: number): string {
  if (index === 0) return 'Today, to book the day';
  return dueOn === null ? label : `${label}, by ${formatDayShort(dueOn)}`;
}

interface Row {
  readonly key: string;
  readonly label: string;
  readonly note?: string;
  readonly value: ReactNode;
}

function Rows({ rows }: { readonly rows: readonly Row[] }) {
  return (
    <dl>
      {rows.map((row) => (
        <div key={row.key} className="flex items-baseline justify-between gap-4 border-b border-rule py-2.5">
          <dt>
            {row.label}
            {row.note ? <span className="block text-small text-soft">{row.note}</span> : null}
          </dt>
          <dd className="tabular text-right">{row.value}</dd>
        </div>
      ))}
    </dl>
  );
}
