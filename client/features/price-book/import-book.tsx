import { useState } from 'react';
import { useSearchParams } from 'react-router-dom';
import { z } from 'zod';
import type { ProblemError } from '#client/api/problem-error.ts';
import { useAnnounce } from '#client/ui/announcer.tsx';
import { Button } from '#client/ui/button.tsx';
import { Dialog } from '#client/ui/dialog.tsx';
import { CheckField, Field } from '#client/ui/fields.tsx';
import { useSite } from '#client/ui/site.tsx';
import { costBookSchema, priceBookSchema } from '#contract/pricing';
import { useCreateBook } from './queries.ts';

/** A file as `Export` writes it; the book alone is taken too. */
const fileSchema = z.union([
  z.strictObject({ book: priceBookSchema, costs: costBookSchema.optional() }),
  priceBookSchema.transform((book) => ({ book, costs: undefined })),
]);
type BookFile = z.output<typeof fileSchema>;

/** Brings a price book from a file as a draft; what does not fit is told before anything is sent. */
export function ImportBook() {
  const [open, setOpen] = useState(false);
  return (
    <>
      <Button onPress={() => setOpen(true)}>Import</Button>
      {open ? <ImportDialog onClose={() => setOpen(false)} /> : null}
    </>
  );
}

function ImportDialog({ onClose }: { readonly onClose: () => void }) {
  const site = useSite();
  const create = useCreateBook();
  const announce = useAnnounce();
  const [, setSearch] = useSearchParams();
  const [file, setFile] = useState<BookFile>();
  const [refusals, setRefusals] = useState<readonly string[]>([]);
  const [oneSite, setOneSite] = useState(false);
  const problem = create.error as ProblemError | null;
  const read = async (chosen: File | undefined): Promise<void> => {
    setFile(undefined);
    setRefusals([]);
    if (!chosen) return;
    const parsed = readFile(await chosen.text());
    if (parsed.ok) setFile(parsed.file);
    else setRefusals(parsed.refusals);
  };
  const send = (): void => {
    if (!file) {
      setRefusals(['Choose a file first.']);
      return;
    }
    const siteId = oneSite ? site.siteId : null;
    const body = file.costs
      ? ({ from: 'file', siteId, book: file.book, costs: file.costs } as const)
      : ({ from: 'file', siteId, book: file.book } as const);
    create.mutate(
      { body },
      {
        onSuccess: (draft) => {
          announce(`Draft ${draft.versionNo} made from the file.`);
          onClose();
          setSearch({ book: String(draft.priceBookId) });
        },
      },
    );
  };
  return (
    <Dialog title="Import a price book" open onClose={onClose}>
      <p className="mb-4 text-soft">
        A file as Export writes it. It becomes a draft; nobody is quoted from it yet.
      </p>
      <Field id="book-file" label="File" error={refusals[0]}>
        {(linked) => (
          <input
            {...linked}
            type="file"
            accept=".json,application/json"
            onChange={(event) => void read(event.target.files?.[0])}
            className="block w-full min-h-10"
          />
        )}
      </Field>
      {refusals.length > 1 ? (
        <ul className="mt-2 text-small">
          {refusals.slice(1, 8).map((refusal) => (
            <li key={refusal}>{refusal}</li>
          ))}
          {refusals.length > 8 ? <li>and {refusals.length - 8} more</li> : null}
        </ul>
      ) : null}
      <div className="mt-4">
        <CheckField label={`Only for ${site.name}`} checked={oneSite} onChange={setOneSite} />
      </div>
      {problem ? (
        <p role="alert" className="mt-4 font-semibold text-bengal">
          {problem.message}
        </p>
      ) : null}
      <div className="mt-6 flex flex-wrap gap-3">
        <Button kind="primary" sending={create.isPending} onPress={send}>
          Make a draft of it
        </Button>
        <Button kind="quiet" onPress={onClose}>
          Leave it
        </Button>
      </div>
    </Dialog>
  );
}

/** Reads a file, or says for each place what does not fit. */
export function readFile(
  text: string,
): { readonly ok: true; readonly file: BookFile } | { readonly ok: false; readonly refusals: string[] } {
  let json: unknown;
  try {
    json = JSON.parse(text);
  } catch {
    return { ok: false, refusals: ['This file is not JSON.'] };
  }
  const parsed = fileSchema.safeParse(json);
  if (parsed.success) return { ok: true, file: parsed.data };
  const whole = typeof json === 'object' && json !== null && 'book' in json;
  const single = (
    whole ? z.strictObject({ book: priceBookSchema, costs: costBookSchema.optional() }) : priceBookSchema
  ).safeParse(json);
  const issues = single.success ? [] : single.error.issues;
  return {
    ok: false,
    refusals: [
      'This file does not fit:',
      ...issues.map((issue) => `${issue.path.join('.')}: ${issue.message}`),
    ],
  };
}
