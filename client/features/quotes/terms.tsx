import { Figure } from '#client/ui/figure.tsx';
import { type SheetColumn, SheetTable } from '#client/ui/sheet-table.tsx';
import { StateWord } from '#client/ui/states.tsx';
import { currencySign } from '#domain/money/index';
import { type CancellationRow, type Due, formatRate, type PricedCourse } from '#domain/pricing/index';
import { formatDay } from '#domain/time/index';
import { cancellationWhy, dueWhy } from './derivations.ts';
import { cancellationWords, dueDayWords } from './words.ts';

/** What goes with the price: when it falls due, what comes back, what is in it, what should be known. */
export function Terms({ course }: { readonly course: PricedCourse }) {
  return (
    <>
      <Warnings course={course} />
      <div className="mt-8 grid gap-8 md:grid-cols-2">
        <Schedule course={course} />
        <Cancellation course={course} />
      </div>
      <div className="mt-8 grid gap-8 md:grid-cols-2">
        <Included course={course} />
        <Cover course={course} />
      </div>
    </>
  );
}

function Warnings({ course }: { readonly course: PricedCourse }) {
  if (course.warnings.length === 0) return null;
  return (
    <ul className="mt-4" aria-label="To be known before sending">
      {course.warnings.map((warning) => (
        <li
          key={`${warning.code}-${warning.eye ?? ''}-${warning.words}`}
          className="border-b border-rule py-1.5"
        >
          <StateWord tone="waiting">{warning.eye ?? 'note'}</StateWord>{' '}
          <span className="text-small">{warning.words}</span>
        </li>
      ))}
    </ul>
  );
}

function Schedule({ course }: { readonly course: PricedCourse }) {
  const columns: readonly SheetColumn<Due>[] = [
    {
      id: 'when',
      head: 'When',
      cell: (due) => (
        <>
          {dueDayWords(due.dueOn, due.kind)}{' '}
          <span className="text-small text-soft">
            {due.kind === 'deposit' || due.kind === 'balance' ? due.detail : due.label}
          </span>
        </>
      ),
    },
    {
      id: 'amount',
      head: currencySign(course.currency),
      align: 'right',
      cell: (due) => (
        <Figure
          id={`due-${due.id}`}
          amount={due.amountMinor}
          currency={course.currency}
          why={dueWhy(due, course)}
        />
      ),
    },
  ];
  return (
    <div>
      <SheetTable
        caption="When it falls due"
        columns={columns}
        rows={course.schedule}
        rowKey={(due) => due.id}
      />
      {course.credit && course.credit.chargeMinor > 0 ? (
        <p className="mt-2 text-small text-soft">
          Paying over time costs {formatRate(course.credit.aprBp)} a year (annual percentage rate).
        </p>
      ) : null}
    </div>
  );
}

function Cancellation({ course }: { readonly course: PricedCourse }) {
  const columns: readonly SheetColumn<CancellationRow>[] = [
    { id: 'if', head: 'If it is cancelled', cell: cancellationWords },
    {
      id: 'back',
      head: `comes back, ${currencySign(course.currency)}`,
      align: 'right',
      cell: (row) => {
        if (row.event === 'moves') return null;
        return row.comesBackMinor === null ? (
          'all'
        ) : (
          <Figure
            id={`back-${row.event}-${row.until ?? row.detail}`}
            amount={row.comesBackMinor}
            currency={course.currency}
            why={cancellationWhy(row, row.comesBackMinor, course)}
          />
        );
      },
    },
  ];
  return (
    <SheetTable
      caption="If it is cancelled"
      columns={columns}
      rows={course.cancellation}
      rowKey={(row) => `${row.event}-${row.until ?? ''}-${row.detail}`}
    />
  );
}

function Included({ course }: { readonly course: PricedCourse }) {
  return (
    <div>
      <h3>In the price</h3>
      <ul className="mt-1">
        {course.included.map((each) => (
          <li key={`${each.ruleId}-${each.label}`} className="border-b border-rule py-1.5">
            {each.label}
          </li>
        ))}
        {course.included.length === 0 ? <li className="py-1.5 text-soft">The surgery alone.</li> : null}
      </ul>
      {course.notIncluded.length > 0 ? (
        <p className="mt-2 text-small text-soft">Not in it: {course.notIncluded.join(', ')}.</p>
      ) : null}
    </div>
  );
}

function Cover({ course }: { readonly course: PricedCourse }) {
  if (course.cover.length === 0) return null;
  return (
    <div>
      <h3>Enhancement cover</h3>
      {course.cover.map((cover) => (
        <div key={cover.eye} className="border-b border-rule py-1.5">
          <p>
            {cover.eye}, {cover.label}
            {cover.until ? <span className="text-soft"> until {formatDay(cover.until)}</span> : null}
          </p>
          <p className="text-small text-soft">{cover.conditions.join('; ')}</p>
        </div>
      ))}
    </div>
  );
}
