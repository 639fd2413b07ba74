import { useState } from 'react';
import { useNavigate, useSearchParams } from 'react-router-dom';
import type { ProblemError } from '#client/api/problem-error.ts';
import { useSession } from '#client/api/session.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button, LinkButton } from '#client/ui/button.tsx';
import { ConfirmDialog } from '#client/ui/dialog.tsx';
import { DateField } from '#client/ui/fields.tsx';
import { useSite } from '#client/ui/site.tsx';
import type { PriceBookView } from '#contract/catalogue';
import { ImportBook } from './import-book.tsx';
import { useCreateBook, usePutInForce } from './queries.ts';

/** What can be done with the version on the page: compare, export, and for managers draft, import, put in force. */
export function BookActions({
  book,
  comparing,
}: {
  readonly book: PriceBookView;
  readonly comparing: boolean;
}) {
  const { person } = useSession();
  const manager = person?.roles.includes('manager') ?? false;
  const [putting, setPutting] = useState(false);
  return (
    <>
      {book.standing === 'in_force' ? null : (
        <LinkButton to={comparing ? `?book=${book.priceBookId}` : `?book=${book.priceBookId}&compare=1`}>
          {comparing ? 'Read it' : 'Compare with the one in force'}
        </LinkButton>
      )}
      <Button onPress={() => exportBook(book)}>Export</Button>
      {manager ? <ImportBook /> : null}
      {manager && book.standing === 'draft' ? (
        <Button kind="primary" onPress={() => setPutting(true)}>
          Put in force
        </Button>
      ) : null}
      {manager && book.standing !== 'draft' ? <BeginDraft siteId={book.siteId} /> : null}
      {putting ? <PutInForce book={book} onClose={() => setPutting(false)} /> : null}
    </>
  );
}

function BeginDraft({ siteId }: { readonly siteId: number | null }) {
  const create = useCreateBook();
  const announce = useAnnounce();
  const [, setSearch] = useSearchParams();
  return (
    <Button
      kind="primary"
      sending={create.isPending}
      onPress={() =>
        create.mutate(
          { body: { from: 'in_force', siteId } },
          {
            onSuccess: (draft) => {
              announce(`Draft ${draft.versionNo} begun from the version in force.`);
              setSearch({ book: String(draft.priceBookId) });
            },
            onError: (error) => announce(error.message),
          },
        )
      }
    >
      Begin a draft
    </Button>
  );
}

function PutInForce({ book, onClose }: { readonly book: PriceBookView; readonly onClose: () => void }) {
  const site = useSite();
  const put = usePutInForce();
  const announce = useAnnounce();
  const navigate = useNavigate();
  const [day, setDay] = useState<string>(site.businessDay);
  const problem = put.error as ProblemError | null;
  return (
    <ConfirmDialog
      title={`Put version ${book.versionNo} in force`}
      open
      onClose={onClose}
      confirm="Put in force"
      sending={put.isPending}
      error={problem && !problem.fieldMessage('inForceOn') ? problem.message : undefined}
      onConfirm={() =>
        put.mutate(
          {
            params: { priceBookId: book.priceBookId },
            body: { contentHash: book.contentHash, inForceOn: day },
          },
          {
            onSuccess: () => {
              announce(`Version ${book.versionNo} is in force from that day.`);
              onClose();
              void navigate(`/price-book?book=${book.priceBookId}`);
            },
          },
        )
      }
    >
      <p className="mb-4 text-soft">
        From that day every new quote is priced from it, and it never changes again. Quotes already sent keep
        theirs.
      </p>
      <DateField
        label="In force from"
        value={day}
        min={site.businessDay}
        onChange={setDay}
        error={problem?.fieldMessage('inForceOn')}
        className="max-w-56"
      />
    </ConfirmDialog>
  );
}

/** Saves the version as a file that can be imported again; the costs are in it for those who may see them. */
function exportBook(book: PriceBookView): void {
  const file = book.costs === null ? { book: book.book } : { book: book.book, costs: book.costs };
  const url = URL.createObjectURL(new Blob([JSON.stringify(file, null, 2)], { type: 'application/json' }));
  const link = document.createElement('a');
  link.href = url;
  link.download = `price-book-${book.versionNo}.json`;
  link.click();
  URL.revokeObjectURL(url);
}
