import { useQuery } from '@tanstack/react-query';
import { useCallback, useEffect, useState } from 'react';
import { Link, useNavigate, useSearchParams } from 'react-router-dom';
import { useSession } from '#client/api/session.ts';
import { Button } from '#client/ui/button.tsx';
import { TextField } from '#client/ui/fields.tsx';
import { Page } from '#client/ui/page.tsx';
import { PairMark } from '#client/ui/pair-mark.tsx';
import { type SheetColumn, SheetTable } from '#client/ui/sheet-table.tsx';
import { useShortcut } from '#client/ui/shortcuts.tsx';
import { useSite } from '#client/ui/site.tsx';
import { EmptyState, ErrorState, Skeleton } from '#client/ui/states.tsx';
import type { PatientSummary } from '#contract/patients';
import { formatDay } from '#domain/time/index';
import { patientsQuery } from './queries.ts';
import { TakeUpDialog } from './take-up-dialog.tsx';
import { QUOTE_WORDS } from './words.ts';

const TYPING_MS = 250;

/** Patients of one's sites, found by name, birthday or address; without words, those taken up last at this site. */
export function PatientsPage() {
  const [search, setSearch] = useSearchParams();
  const { person } = useSession();
  const site = useSite();
  const navigate = useNavigate();
  const words = search.get('search') ?? '';
  const taking = search.get('new') !== null;
  const found = useQuery(patientsQuery(words, words === '' ? site.siteId : undefined));
  const mayTakeUp = person?.roles.some((role) => role !== 'surgeon' && role !== 'auditor') ?? false;
  const set = useCallback(
    (name: string, value: string | null) =>
      setSearch(
        (before) => {
          const next = new URLSearchParams(before);
          if (value === null || value === '') next.delete(name);
          else next.set(name, value);
          return next;
        },
        { replace: true },
      ),
    [setSearch],
  );
  const takeUp = useCallback(() => {
    if (mayTakeUp) set('new', '1');
  }, [mayTakeUp, set]);
  useShortcut('n', takeUp);
  return (
    <Page
      title="Patients"
      lead={words === '' ? `Taken up last at ${site.name}` : 'Found at your sites'}
      actions={
        mayTakeUp ? (
          <Button kind="primary" onPress={takeUp}>
            New patient
          </Button>
        ) : null
      }
      shortcuts={mayTakeUp ? [{ keys: 'n', words: 'new patient' }] : []}
    >
      <SearchField words={words} onWords={(next) => set('search', next)} />
      {found.isPending ? <Skeleton rows={8} label="Looking for patients" /> : null}
      {found.isError ? <ErrorState error={found.error} retry={() => void found.refetch()} /> : null}
      {found.data ? (
        <Found
          patients={found.data.patients}
          more={found.data.more}
          words={words}
          takeUp={mayTakeUp ? takeUp : undefined}
        />
      ) : null}
      {taking ? (
        <TakeUpDialog
          onClose={() => set('new', null)}
          onTakenUp={(patientId) => void navigate(`/patients/${patientId}`)}
        />
      ) : null}
    </Page>
  );
}

function SearchField({
  words,
  onWords,
}: {
  readonly words: string;
  readonly onWords: (words: string) => void;
}) {
  const [typed, setTyped] = useState(words);
  useEffect(() => setTyped(words), [words]);
  useEffect(() => {
    if (typed === words) return;
    const timer = setTimeout(() => onWords(typed.trim()), TYPING_MS);
    return () => clearTimeout(timer);
  }, [typed, words, onWords]);
  return (
    <TextField
      label="Name, birthday or e-mail"
      type="search"
      value={typed}
      onChange={setTyped}
      hint="Beginnings are enough: “quill 14 June 1996”"
      className="mb-6 max-w-md"
    />
  );
}

function Found({
  patients,
  more,
  words,
  takeUp,
}: {
  readonly patients: readonly PatientSummary[];
  readonly more: boolean;
  readonly words: string;
  readonly takeUp: (() => void) | undefined;
}) {
  if (patients.length === 0) {
    return (
      <EmptyState
        title={words === '' ? 'No patients here yet' : `Nobody found for “${words}”`}
        action={takeUp ? <Button onPress={takeUp}>Take up a patient</Button> : null}
      >
        {words === ''
          ? 'Patients stand here once somebody has taken them up.'
          : 'Check the spelling, or try the birthday alone.'}
      </EmptyState>
    );
  }
  return (
    <>
      <SheetTable caption="Patients" columns={COLUMNS} rows={patients} rowKey={(row) => row.patientId} />
      {more ? (
        <p className="mt-3 text-soft">There are more. Type more of the name, or the birthday.</p>
      ) : null}
    </>
  );
}

const COLUMNS: readonly SheetColumn<PatientSummary>[] = [
  {
    id: 'mark',
    head: <span className="sr-only">Eyes</span>,
    width: 'w-14',
    cell: ({ course }) => (course ? <PairMark eyes={course.eyes} /> : null),
  },
  {
    id: 'name',
    head: 'Name',
    cell: (row) => (
      <Link to={`/patients/${row.patientId}`} className="font-semibold">
        {row.familyName}, {row.givenName}
      </Link>
    ),
  },
  {
    id: 'born',
    head: 'Born',
    cell: (row) => <span className="whitespace-nowrap">{formatDay(row.bornOn)}</span>,
  },
  {
    id: 'reach',
    head: 'To be reached',
    wide: true,
    cell: (row) => <span className="text-soft">{row.email ?? row.phone ?? 'nothing recorded'}</span>,
  },
  {
    id: 'stands',
    head: 'Newest quote',
    wide: true,
    cell: ({ quote }) =>
      quote ? (
        <span>
          {quote.number} <span className="text-soft">{QUOTE_WORDS[quote.state].words}</span>
        </span>
      ) : (
        <span className="text-soft">none</span>
      ),
  },
];
