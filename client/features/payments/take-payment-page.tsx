import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Link, useNavigate, useParams } from 'react-router-dom';
import { call } from '#client/api/call.ts';
import { ProblemError } from '#client/api/problem-error.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { MoneyField, SelectField, TextField } from '#client/ui/fields.tsx';
import { Figure } from '#client/ui/figure.tsx';
import { Money, moneyText } from '#client/ui/money.tsx';
import { DefinitionRows, Page } from '#client/ui/page.tsx';
import { ErrorState, Skeleton } from '#client/ui/states.tsx';
import { type CourseView, getCourse } from '#contract/courses';
import { takePayment } from '#contract/payments';
import { type Minor, minor } from '#domain/money/index';
import { cashStepOf, takePayment as splitPayment, TENDER_LABEL, type Tender } from '#domain/payments/index';

const DESK_TENDERS: readonly Exclude<Tender, 'online_card' | 'credit'>[] = [
  'card_machine',
  'cash',
  'bank_transfer',
  'cheque',
  'lender',
];
type DeskTender = (typeof DESK_TENDERS)[number];

interface TenderTyped {
  readonly key: number;
  readonly tender: DeskTender;
  readonly amountMinor: Minor | null;
  readonly reference: string;
}

/** One payment, split over as many tenders as the patient has. */
export function TakePaymentPage() {
  const courseId = Number(useParams().courseId);
  const course = useQuery({
    queryKey: ['course', courseId],
    queryFn: ({ signal }) => call(getCourse, { params: { courseId } }, signal),
  });
  return (
    <Page
      title="Take payment"
      over={course.data ? <Link to={`/courses/${courseId}`}>{course.data.patient.name}</Link> : null}
      lead={course.data ? `course ${course.data.number}` : null}
    >
      {course.isPending ? <Skeleton rows={5} label="Fetching the course" /> : null}
      {course.isError ? <ErrorState error={course.error} retry={() => void course.refetch()} /> : null}
      {course.data ? <PaymentForm course={course.data} /> : null}
    </Page>
  );
}

function firstTender(amountMinor: Minor): TenderTyped {
  return { key: 1, tender: 'card_machine', amountMinor, reference: '' };
}

function PaymentForm({ course }: { readonly course: CourseView }) {
  const { currency } = course;
  const client = useQueryClient();
  const navigate = useNavigate();
  const announce = useAnnounce();
  const [attemptKey] = useState(() => crypto.randomUUID());
  const [payer, setPayer] = useState(course.patient.name);
  const [tenders, setTenders] = useState<readonly TenderTyped[]>(() => [
    firstTender(course.dueNowMinor > 0 ? course.dueNowMinor : course.leftMinor),
  ]);
  const given = tenders.map(({ tender, amountMinor }) => ({ tender, amountMinor: amountMinor ?? minor(0) }));
  const split = splitPayment({
    tenders: given,
    leftMinor: course.leftMinor,
    cashStepMinor: cashStepOf(currency),
  });
  const take = useMutation({
    mutationFn: () =>
      call(takePayment, {
        params: { courseId: course.courseId },
        body: {
          attemptKey,
          payerName: payer,
          tenders: tenders.map(({ tender, amountMinor, reference }) => ({
            tender,
            amountMinor: amountMinor ?? 0,
            ...(reference.trim() === '' ? {} : { reference: reference.trim() }),
          })),
        },
      }),
    onSuccess: async (receipt) => {
      await client.invalidateQueries({ queryKey: ['course', course.courseId] });
      announce(`Receipt ${receipt.number}: ${moneyText(receipt.totalMinor, currency, true)} taken.`);
      await navigate(`/takings/receipts/${receipt.receiptId}`);
    },
  });
  const problem = take.error instanceof ProblemError ? take.error : undefined;
  const change = (key: number, next: Partial<TenderTyped>): void =>
    setTenders((before) => before.map((each) => (each.key === key ? { ...each, ...next } : each)));
  return (
    <form
      onSubmit={(event) => {
        event.preventDefault();
        take.mutate();
      }}
      className="max-w-3xl"
    >
      <DefinitionRows
        rows={[
          {
            label: 'Due today',
            value: (
              <Figure id="due-now" amount={course.dueNowMinor} currency={currency} why={course.dueNowWhy} />
            ),
          },
          {
            label: 'Left of the price',
            value: <Figure id="left" amount={course.leftMinor} currency={currency} why={course.leftWhy} />,
            strong: true,
          },
        ]}
      />
      <TextField
        className="mt-6 max-w-md"
        label="Paid by"
        hint="The receipt names this person; it need not be the patient."
        value={payer}
        onChange={setPayer}
        error={problem?.fieldMessage('payerName')}
      />
      {tenders.map((typed, index) => (
        <fieldset
          key={typed.key}
          className="mt-6 grid gap-4 border-t border-rule pt-4 sm:grid-cols-[12rem_10rem_1fr_auto]"
        >
          <legend className="sr-only">Tender {index + 1}</legend>
          <SelectField
            label="Tender"
            value={typed.tender}
            onChange={(value) => change(typed.key, { tender: value as DeskTender })}
            choices={DESK_TENDERS.map((value) => ({ value, label: TENDER_LABEL[value] }))}
          />
          <MoneyField
            label={typed.tender === 'cash' ? `Handed over, ${currency}` : `Amount, ${currency}`}
            currency={currency}
            amount={typed.amountMinor}
            onAmount={(amountMinor) => change(typed.key, { amountMinor })}
            error={problem?.fieldMessage(`tenders.${index}.amountMinor`)}
          />
          {typed.tender === 'cash' ? (
            <div />
          ) : (
            <TextField
              label={typed.tender === 'card_machine' ? 'Slip number' : 'Reference'}
              value={typed.reference}
              onChange={(reference) => change(typed.key, { reference })}
            />
          )}
          <div className="self-end">
            {tenders.length > 1 ? (
              <Button
                kind="quiet"
                onPress={() => setTenders((before) => before.filter((each) => each.key !== typed.key))}
              >
                Leave out
              </Button>
            ) : null}
          </div>
        </fieldset>
      ))}
      <div className="mt-4">
        <Button
          kind="quiet"
          onPress={() =>
            setTenders((before) => [
              ...before,
              {
                key: Math.max(...before.map((each) => each.key)) + 1,
                tender: 'cash',
                amountMinor: null,
                reference: '',
              },
            ])
          }
        >
          Add another tender
        </Button>
      </div>
      <div className="mt-6" aria-live="polite">
        {split.ok ? (
          <DefinitionRows
            rows={[
              ...(split.changeMinor > 0
                ? [
                    {
                      label: 'Change to give',
                      value: <Money amount={split.changeMinor} currency={currency} />,
                      strong: true,
                    },
                  ]
                : []),
              ...(split.roundingMinor === 0
                ? []
                : [
                    {
                      label: 'Cash rounding',
                      value: <Money amount={split.roundingMinor} currency={currency} />,
                    },
                  ]),
              {
                label: 'Receipt',
                value: <Money amount={split.totalMinor} currency={currency} />,
                strong: true,
              },
              ...(split.creditMinor > 0
                ? [
                    {
                      label: 'Of this beyond the price, kept as credit on account',
                      value: <Money amount={split.creditMinor} currency={currency} />,
                    },
                  ]
                : []),
              {
                label: 'Left afterwards',
                value: <Money amount={minor(course.leftMinor - split.appliedMinor)} currency={currency} />,
              },
            ]}
          />
        ) : (
          <p className="text-soft">{split.refusals[0]?.words}</p>
        )}
      </div>
      {problem ? (
        <p role="alert" className="mt-4 font-semibold text-bengal">
          {problem.message}
        </p>
      ) : null}
      <div className="mt-6">
        <Button kind="primary" type="submit" sending={take.isPending}>
          {split.ok ? `Take ${moneyText(split.totalMinor, currency, true)}` : 'Take payment'}
        </Button>
      </div>
    </form>
  );
}
