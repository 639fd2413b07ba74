import { EyeColumns } from '#client/ui/eye-columns.tsx';
import { DateField, SelectField } from '#client/ui/fields.tsx';
import type { QuoteView } from '#contract/quotes';
import type { Eye } from '#domain/eye';
import type { PriceBook } from '#domain/pricing/index';
import type { OptionDraft } from '#domain/quotes/index';
import { isClinicDate } from '#domain/time/index';
import { chooseDay, chooseProcedure } from './edit-draft.ts';
import type { FieldErrors } from './field-errors.ts';

/** What one option wants for each eye: procedure, cover, and a day of its own when the eyes are staged. */
export function EyeWishes({
  option,
  book,
  plan,
  errors,
  onChange,
  disabled,
}: {
  readonly option: OptionDraft;
  readonly book: PriceBook;
  readonly plan: QuoteView['plan'];
  readonly errors: FieldErrors;
  readonly onChange: (next: OptionDraft) => void;
  readonly disabled: boolean;
}) {
  const packaged = book.packages.find((each) => each.id === option.packageId)?.includes.coverId ?? null;
  return (
    <EyeColumns headings={false}>
      {(eye) => (
        <div
          className={`grid gap-4 ${packaged === null && option.procedures[eye] !== null ? 'sm:max-md:grid-cols-2 xl:grid-cols-2' : ''}`}
        >
          <ProcedureField
            eye={eye}
            option={option}
            book={book}
            plan={plan}
            errors={errors}
            disabled={disabled}
            onChange={onChange}
          />
          {option.procedures[eye] !== null && book.covers.length > 0 && packaged === null ? (
            <SelectField
              label="Enhancement cover"
              value={option.covers[eye] ?? ''}
              disabled={disabled}
              error={errors.at(`eyes.${eye}.coverId`)}
              onChange={(id) =>
                onChange({ ...option, covers: { ...option.covers, [eye]: id === '' ? null : id } })
              }
              choices={[
                { value: '', label: 'No cover' },
                ...book.covers.map((cover) => ({ value: cover.id, label: withoutPrefix(cover.label) })),
              ]}
            />
          ) : null}
          {option.surgery.plan === 'staged' && option.procedures[eye] !== null ? (
            <DateField
              label="Day of surgery"
              value={option.surgery.on[eye] ?? ''}
              disabled={disabled}
              error={errors.at(`surgery.on.${eye}`)}
              onChange={(text) => onChange(chooseDay(option, eye, isClinicDate(text) ? text : null))}
            />
          ) : null}
        </div>
      )}
    </EyeColumns>
  );
}

/** "24 months": the field's own label says what it is. */
function withoutPrefix(label: string): string {
  return label.replace(/^enhancement cover,\s*/i, '').replace(/^./, (letter) => letter.toUpperCase());
}

function ProcedureField({
  eye,
  option,
  book,
  plan,
  errors,
  onChange,
  disabled,
}: {
  readonly eye: Eye;
  readonly option: OptionDraft;
  readonly book: PriceBook;
  readonly plan: QuoteView['plan'];
  readonly errors: FieldErrors;
  readonly onChange: (next: OptionDraft) => void;
  readonly disabled: boolean;
}) {
  const approved = plan?.good ? plan.procedureIds[eye] : null;
  const chosen = option.procedures[eye];
  const gone = chosen !== null && !book.procedures.some((procedure) => procedure.id === chosen);
  return (
    <SelectField
      label="Procedure"
      value={chosen ?? ''}
      disabled={disabled}
      error={errors.at(`eyes.${eye}.procedureId`)}
      hint={approvalWords(chosen, approved)}
      onChange={(id) => onChange(chooseProcedure(option, eye, id === '' ? null : id))}
      choices={[
        { value: '', label: 'This eye is not treated' },
        ...book.procedures.map((procedure) => ({
          value: procedure.id,
          label:
            procedure.id !== chosen && approved?.includes(procedure.id)
              ? `${procedure.label} · approved`
              : procedure.label,
        })),
        ...(gone ? [{ value: chosen, label: `${chosen}, no longer in the price book` }] : []),
      ]}
    />
  );
}

function approvalWords(chosen: string | null, approved: readonly string[] | null): string | undefined {
  if (chosen === null) return undefined;
  if (approved === null) return 'No plan is in force: an estimate, subject to assessment';
  return approved.includes(chosen) ? 'Approved by the surgeon' : undefined;
}
