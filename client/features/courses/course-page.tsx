import { queryOptions, useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Link, useParams } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { useSession } from '#client/api/session.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button, LinkButton } from '#client/ui/button.tsx';
import { ConfirmDialog } from '#client/ui/dialog.tsx';
import { DateField, TextAreaField } from '#client/ui/fields.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { Money } from '#client/ui/money.tsx';
import { Page, Section } from '#client/ui/page.tsx';
import { PairMark } from '#client/ui/pair-mark.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { useSite } from '#client/ui/site.tsx';
import { Caution, EmptyState, ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import { type CourseView, getCourse } from '#contract/courses';
import type { Role } from '#contract/define';
import { markEyeDone, recordVisit } from '#contract/delivery';
import { formatDay, formatDayShort } from '#domain/time/index';

type CourseEye = CourseView['eyes'][number];

const courseQuery = (courseId: number) =>
  queryOptions({
    queryKey: ['course', courseId],
    queryFn: ({ signal }) => call(getCourse, { params: { courseId } }, signal),
  });

/** A course of care: both eyes, what is due and paid, receipts, and the next step of each. */
export function CoursePage() {
  const courseId = Number(useParams().courseId);
  const course = useQuery(courseQuery(courseId));
  if (course.isPending) {
    return (
      <Page title="Course of care">
        <Skeleton rows={8} label="Fetching the course" />
      </Page>
    );
  }
  if (course.isError) {
    return (
      <Page title="Course of care">
        <ErrorState error={course.error} retry={() => void course.refetch()} />
      </Page>
    );
  }
  return <Course course={course.data} />;
}

function useRoles(): readonly Role[] {
  return useSession().person?.roles ?? [];
}

function Course({ course }: { readonly course: CourseView }) {
  const roles = useRoles();
  const mayTake = roles.includes('front_desk') || roles.includes('manager');
  return (
    <Page
      title={course.patient.name}
      over={
        <>
          <Link to={`/patients/${course.patient.patientId}`}>{course.patient.name}</Link> · course{' '}
          {course.number}
        </>
      }
      lead={`accepted ${formatDay(course.acceptedOn)} from quote ${course.quoteNumber} · ${course.surgeonName}`}
      actions={
        mayTake && course.leftMinor > 0 ? (
          <LinkButton kind="primary" to={`/courses/${course.courseId}/pay`}>
            Take payment
          </LinkButton>
        ) : null
      }
    >
      <Eyes course={course} roles={roles} />
      <MoneyOf course={course} />
      <Receipts course={course} />
      <Visits course={course} roles={roles} />
      <Caution>
        Whether an eye may be treated is the surgeon’s decision. What is recognised, and when, follows the
        clinic’s accounting policy.
      </Caution>
    </Page>
  );
}

function Eyes({ course, roles }: { readonly course: CourseView; readonly roles: readonly Role[] }) {
  const mayRecord = roles.some((role) => role === 'surgeon' || role === 'front_desk' || role === 'manager');
  return (
    <div className="grid border-t-2 border-ink sm:grid-cols-2">
      {(['OD', 'OS'] as const).map((side, index) => {
        const eye = course.eyes.find((each) => each.eye === side);
        return (
          <section
            key={side}
            aria-label={side === 'OD' ? 'Right eye' : 'Left eye'}
            className={`py-4 ${index === 1 ? 'sm:border-l sm:border-ink sm:pl-6' : 'sm:pr-6'}`}
          >
            <h2 className="flex items-center gap-3">
              {eye ? <PairMark eyes={[eye]} only={side} /> : null}
              {side === 'OD' ? 'Right eye' : 'Left eye'}{' '}
              <span className="text-small font-normal text-soft">{side}</span>
            </h2>
            {eye ? (
              <EyeBody course={course} eye={eye} mayRecord={mayRecord} />
            ) : (
              <p className="mt-2 text-soft">not part of this course</p>
            )}
          </section>
        );
      })}
    </div>
  );
}

function EyeBody({
  course,
  eye,
  mayRecord,
}: {
  readonly course: CourseView;
  readonly eye: CourseEye;
  readonly mayRecord: boolean;
}) {
  return (
    <div className="mt-2">
      <p>{eye.procedureName}</p>
      <p className="text-small text-soft">{eyeWords(eye)}</p>
      <dl className="mt-3 grid gap-1 text-small">
        <div className="flex justify-between gap-4">
          <dt className="text-soft">Its share of the price</dt>
          <dd>
            <Money amount={eye.priceMinor} currency={course.currency} />
          </dd>
        </div>
        <div className="flex items-baseline justify-between gap-4">
          <dt className="text-soft">Unpaid of it</dt>
          <dd>
            <Figure
              id={`unpaid-${eye.eye}`}
              amount={eye.unpaidMinor}
              currency={course.currency}
              why={eye.unpaidWhy}
            />
          </dd>
        </div>
      </dl>
      {eye.state === 'planned' && mayRecord ? <MarkDone course={course} eye={eye} /> : null}
    </div>
  );
}

function eyeWords(eye: CourseEye): string {
  if (eye.state === 'done' && eye.doneOn) return `done ${formatDay(eye.doneOn)}`;
  if (eye.state === 'cancelled') return 'cancelled';
  return eye.plannedOn ? `planned for ${formatDay(eye.plannedOn)}` : 'no day agreed yet';
}

function MarkDone({ course, eye }: { readonly course: CourseView; readonly eye: CourseEye }) {
  const site = useSite();
  const client = useQueryClient();
  const announce = useAnnounce();
  const [open, setOpen] = useState(false);
  const [doneOn, setDoneOn] = useState<string>(site.businessDay);
  const [reason, setReason] = useState('');
  const unpaid = eye.unpaidMinor > 0;
  const name = eye.eye === 'OD' ? 'right' : 'left';
  const mark = useMutation({
    mutationFn: () =>
      call(markEyeDone, {
        params: { courseId: course.courseId, eye: eye.eye },
        body: { doneOn, ...(reason.trim() === '' ? {} : { overrideReason: reason.trim() }) },
      }),
    onSuccess: (next) => {
      client.setQueryData(courseQuery(course.courseId).queryKey, next);
      setOpen(false);
      announce(`The ${name} eye is recorded as done.`);
    },
  });
  return (
    <div className="mt-4">
      <Button onPress={() => setOpen(true)}>Record the {name} eye as done</Button>
      <ConfirmDialog
        title={`The ${name} eye of ${course.patient.name} is done`}
        open={open}
        onClose={() => setOpen(false)}
        confirm="Record it as done"
        sending={mark.isPending}
        error={mark.error?.message}
        onConfirm={() => mark.mutate()}
      >
        <p className="mb-4">
          Its part of the price is earned with this, and {course.surgeonName}’s fee accrues. Neither can be
          taken back without a correction that both can see.
        </p>
        <DateField label="Done on" value={doneOn} onChange={setDoneOn} />
        {unpaid ? (
          <TextAreaField
            className="mt-4"
            label="Reason to go on unpaid"
            hint="The manager’s alone: part of this eye’s share is not paid and will stand as owed."
            value={reason}
            onChange={setReason}
          />
        ) : null}
      </ConfirmDialog>
    </div>
  );
}

function MoneyOf({ course }: { readonly course: CourseView }) {
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

function Receipts({ course }: { readonly course: CourseView }) {
  const mayRead = useRoles().some((role) => role !== 'surgeon');
  return (
    <Section title="Receipts">
      {course.receipts.length === 0 ? (
        <EmptyState title="Nothing was paid yet">The first receipt appears here.</EmptyState>
      ) : (
        <SheetTable
          caption="Receipts"
          rows={course.receipts}
          rowKey={(receipt) => receipt.receiptId}
          columns={[
            {
              id: 'number',
              head: 'Receipt',
              cell: (receipt) =>
                mayRead ? (
                  <Link to={`/takings/receipts/${receipt.receiptId}`}>{receipt.number}</Link>
                ) : (
                  receipt.number
                ),
            },
            { id: 'on', head: 'On', cell: (receipt) => formatDayShort(receipt.occurredOn) },
            { id: 'by', head: 'By', wide: true, cell: (receipt) => receipt.tenders.join(', ').toLowerCase() },
            {
              id: 'amount',
              head: `Received, ${course.currency}`,
              align: 'right',
              cell: (receipt) => <Money amount={receipt.totalMinor} currency={course.currency} />,
            },
            {
              id: 'state',
              head: 'State',
              cell: (receipt) =>
                receipt.voided ? (
                  <StateWord tone="wrong">void</StateWord>
                ) : (
                  <StateWord tone="settled">taken</StateWord>
                ),
            },
          ]}
        />
      )}
    </Section>
  );
}

function Visits({ course, roles }: { readonly course: CourseView; readonly roles: readonly Role[] }) {
  const site = useSite();
  const client = useQueryClient();
  const announce = useAnnounce();
  const visit = useMutation({
    mutationFn: () =>
      call(recordVisit, { params: { courseId: course.courseId }, body: { visitedOn: site.businessDay } }),
    onSuccess: (next) => {
      client.setQueryData(courseQuery(course.courseId).queryKey, next);
      announce('The check-up is recorded.');
    },
  });
  const any = course.eyes.some((eye) => eye.state === 'done');
  if (!any || !roles.some((role) => role === 'front_desk' || role === 'manager' || role === 'surgeon'))
    return null;
  return (
    <Section title="Aftercare">
      <div className="flex flex-wrap items-center gap-4">
        <Button sending={visit.isPending} onPress={() => visit.mutate()}>
          Record a check-up held today
        </Button>
        {visit.error ? (
          <p role="alert" className="font-semibold text-bengal">
            {visit.error.message}
          </p>
        ) : null}
      </div>
    </Section>
  );
}
