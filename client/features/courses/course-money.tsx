import { Figure } from '#client/ui/figure.tsx';
import { Money } from '#client/ui/money.tsx';
import { Section } from '#client/ui/page.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { StateWord } from '#client/ui/states.tsx';
import type { CourseView } from '#contract/courses';
import { formatDayShort } from '#domain/time/index';

/** What is due when, what is paid of it, and what is held but not earned. */
export function CourseMoney({ course }: { readonly course: CourseView }) {
  const { currency } = course;
  return (
    <Section title="What is due, and paid">
      <SheetTable
        caption="What is due, and paid"
        rows={course.dues}
        rowKey={(due) => due.dueNo}
        columns={[
          { id: 'what', head: 'When', cell: (due) => due.label },
          {
            id: 'on',
            head: 'By',
            cell: (due) => (due.dueOn ? formatDayShort(due.dueOn) : 'once a day is agreed'),
          },
          {
            id: 'amount',
            head: `Amount, ${currency}`,
            align: 'right',
            cell: (due) => <Money amount={due.amountMinor} currency={currency} />,
          },
          {
            id: 'paid',
            head: `Paid, ${currency}`,
            align: 'right',
            cell: (due) => <Money amount={due.paidMinor} currency={currency} />,
          },
          {
            id: 'state',
            head: 'State',
            wide: true,
            cell: (due) =>
              due.paidMinor >= due.amountMinor ? (
                <StateWord tone="settled">paid</StateWord>
              ) : (
                <StateWord tone="waiting">awaited</StateWord>
              ),
          },
        ]}
        total={
          <tr>
            <th scope="row" colSpan={2} className="py-3 text-left">
              Left to pay
            </th>
            <td colSpan={2} className="py-3 pr-4 text-right">
              <Figure id="left" amount={course.leftMinor} currency={currency} why={course.leftWhy} />
            </td>
            <td className="max-md:hidden" />
          </tr>
        }
      />
      <dl className="mt-4 grid gap-x-12 gap-y-2 text-small sm:grid-cols-2">
        <div className="flex justify-between gap-4">
          <dt className="text-soft">Due today</dt>
          <dd>
            <Figure id="due-now" amount={course.dueNowMinor} currency={currency} why={course.dueNowWhy} />
          </dd>
        </div>
        <div className="flex justify-between gap-4">
          <dt className="text-soft">Not ours yet, deferred income</dt>
          <dd>
            <Figure
              id="held"
              amount={course.notOursYetMinor}
              currency={currency}
              why={course.notOursYetWhy}
            />
          </dd>
        </div>
        {course.creditMinor > 0 ? (
          <div className="flex justify-between gap-4">
            <dt className="text-soft">Credit on account</dt>
            <dd>
              <Money amount={course.creditMinor} currency={currency} />
            </dd>
          </div>
        ) : null}
      </dl>
    </Section>
  );
}
