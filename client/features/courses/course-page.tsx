import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { Link, useParams } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { useSession } from '#client/api/session.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button, LinkButton } from '#client/ui/button.tsx';
import { Money } from '#client/ui/money.tsx';
import { Page, Section } from '#client/ui/page.tsx';
import { SheetTable } from '#client/ui/sheet-table.tsx';
import { useSite } from '#client/ui/site.tsx';
import { Caution, EmptyState, ErrorState, Skeleton, StateWord } from '#client/ui/states.tsx';
import type { CourseView } from '#contract/courses';
import type { Role } from '#contract/define';
import { recordVisit } from '#contract/delivery';
import { formatDay, formatDayShort } from '#domain/time/index';
import { CourseEyes } from './course-eyes.tsx';
import { CourseMoney } from './course-money.tsx';
import { courseQuery } from './queries.ts';

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
      <CourseEyes course={course} roles={roles} />
      <CourseMoney course={course} />
      <Receipts course={course} />
      <Visits course={course} roles={roles} />
      <Caution>
        Whether an eye may be treated is the surgeon’s decision. What is recognised, and when, follows the
        clinic’s accounting policy.
      </Caution>
    </Page>
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
