import { useQuery } from '@tanstack/react-query';
import { useNavigate, useParams, useSearchParams } from 'react-router-dom';
import { useSession } from '#client/api/session.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { Page } from '#client/ui/page.tsx';
import { PairMark } from '#client/ui/pair-mark.tsx';
import { Caution, ErrorState, Skeleton } from '#client/ui/states.tsx';
import type { PatientView } from '#contract/patients';
import { formatDay } from '#domain/time/index';
import { ApprovePlanDialog } from './approve-plan-dialog.tsx';
import { ChangeDialog } from './change-dialog.tsx';
import { EyesSection } from './eyes-section.tsx';
import { patientQuery, useBeginQuote } from './queries.ts';
import { CoursesSection, QuotesSection } from './records-sections.tsx';
import { RefractionDialog } from './refraction-dialog.tsx';
import { ageWords } from './words.ts';

/** A patient's page: eyes with their plan, courses of care, quotes. */
export function PatientPage() {
  const { patientId } = useParams();
  const patient = useQuery(patientQuery(Number(patientId)));
  if (patient.isPending) {
    return (
      <Page title="Patient">
        <Skeleton rows={8} label="Opening the patient’s page" />
      </Page>
    );
  }
  if (patient.isError) {
    return (
      <Page title="Patient">
        <ErrorState error={patient.error} retry={() => void patient.refetch()} />
      </Page>
    );
  }
  return <PatientSheet patient={patient.data} />;
}

type Asking = 'particulars' | 'refraction' | 'plan';

function PatientSheet({ patient }: { readonly patient: PatientView }) {
  const { person } = useSession();
  const announce = useAnnounce();
  const roles = person?.roles ?? [];
  const is = (...wanted: readonly (typeof roles)[number][]) => wanted.some((role) => roles.includes(role));
  const [search, setSearch] = useSearchParams();
  const asking = search.get('ask') as Asking | null;
  const ask = (what: Asking | null): void =>
    setSearch(
      (before) => {
        const next = new URLSearchParams(before);
        if (what === null) next.delete('ask');
        else next.set('ask', what);
        return next;
      },
      { replace: true },
    );
  const done = (words: string): void => {
    ask(null);
    announce(words);
  };
  const [course] = patient.courses;
  const reach = [patient.email, patient.phone].filter((each) => each !== null);
  return (
    <Page
      title={`${patient.givenName} ${patient.familyName}`}
      over={course ? <PairMark eyes={course.eyes} size="large" /> : 'Patient'}
      lead={
        <>
          born {formatDay(patient.bornOn)}, {ageWords(patient.bornOn, patient.today)} ·{' '}
          {reach.length > 0 ? reach.join(' · ') : 'no address or telephone recorded'}
        </>
      }
      actions={
        <>
          {is('counsellor', 'front_desk', 'manager') ? (
            <Button onPress={() => ask('particulars')}>Correct particulars</Button>
          ) : null}
          {is('counsellor', 'manager') ? <BeginQuote patientId={patient.patientId} /> : null}
        </>
      }
    >
      <EyesSection
        patient={patient}
        onRefraction={is('counsellor', 'surgeon', 'manager') ? () => ask('refraction') : undefined}
        onPlan={is('surgeon') ? () => ask('plan') : undefined}
      />
      <CoursesSection patient={patient} linked={is('counsellor', 'front_desk', 'manager', 'auditor')} />
      <QuotesSection patient={patient} linked={is('counsellor', 'front_desk', 'manager', 'auditor')} />
      <Caution>
        Whether an eye may be treated is the surgeon’s decision. These pages price the approved plan.
      </Caution>
      {asking === 'particulars' ? (
        <ChangeDialog
          patient={patient}
          onClose={() => ask(null)}
          onChanged={() => done('Particulars corrected.')}
        />
      ) : null}
      {asking === 'refraction' ? (
        <RefractionDialog
          patient={patient}
          onClose={() => ask(null)}
          onRecorded={() => done('Refraction recorded.')}
        />
      ) : null}
      {asking === 'plan' && is('surgeon') ? (
        <ApprovePlanDialog
          patient={patient}
          onClose={() => ask(null)}
          onApproved={() => done('Plan approved.')}
        />
      ) : null}
    </Page>
  );
}

function BeginQuote({ patientId }: { readonly patientId: number }) {
  const navigate = useNavigate();
  const announce = useAnnounce();
  const begin = useBeginQuote();
  return (
    <Button
      kind="primary"
      sending={begin.isPending}
      onPress={() =>
        begin.mutate(patientId, {
          onSuccess: (quote) => void navigate(`/quotes/${quote.quoteId}`),
          onError: (error) => announce(error.message),
        })
      }
    >
      New quote
    </Button>
  );
}
