import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { call } from '#client/api/call.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { ConfirmDialog } from '#client/ui/dialog.tsx';
import { DateField, TextAreaField } from '#client/ui/fields.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { Money } from '#client/ui/money.tsx';
import { PairMark } from '#client/ui/pair-mark.tsx';
import { useSite } from '#client/ui/site.tsx';
import type { CourseView } from '#contract/courses';
import type { Role } from '#contract/define';
import { markEyeDone } from '#contract/delivery';
import { formatDay } from '#domain/time/index';
import { courseQuery } from './queries.ts';

type CourseEye = CourseView['eyes'][number];

/** Both eyes side by side: what is planned or done, what is unpaid, and recording that one is done. */
export function CourseEyes({
  course,
  roles,
}: {
  readonly course: CourseView;
  readonly roles: readonly Role[];
}) {
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
