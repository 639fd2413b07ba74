import { useQuery } from '@tanstack/react-query';
import type { ProblemError } from '#client/api/problem-error.ts';
import { DateField, SelectField, TextField } from '#client/ui/fields.tsx';
import { procedureNamesQuery } from './queries.ts';

/** A patient's particulars as typed. */
export interface Particulars {
  readonly givenName: string;
  readonly familyName: string;
  readonly bornOn: string;
  readonly email: string;
  readonly phone: string;
  readonly patientClass: string;
}

/** The body of a request: what was left empty is not known. */
export function particularsBody(typed: Particulars) {
  const orNull = (text: string): string | null => (text.trim() === '' ? null : text.trim());
  return { ...typed, email: orNull(typed.email), phone: orNull(typed.phone) };
}

/** The fields of a patient's particulars, each with what the server says about it. */
export function ParticularsFields({
  typed,
  onType,
  problem,
  siteId,
}: {
  readonly typed: Particulars;
  readonly onType: (next: Particulars) => void;
  readonly problem: ProblemError | null;
  readonly siteId: number;
}) {
  const set = (field: keyof Particulars) => (value: string) => onType({ ...typed, [field]: value });
  const error = (field: keyof Particulars) => problem?.fieldMessage(field);
  return (
    <div className="grid gap-4 sm:grid-cols-2">
      <TextField
        label="Given name"
        value={typed.givenName}
        onChange={set('givenName')}
        error={error('givenName')}
        autoComplete="off"
        required
      />
      <TextField
        label="Family name"
        value={typed.familyName}
        onChange={set('familyName')}
        error={error('familyName')}
        autoComplete="off"
        required
      />
      <DateField
        label="Born on"
        value={typed.bornOn}
        onChange={set('bornOn')}
        error={error('bornOn')}
        required
      />
      <PriceClass value={typed.patientClass} onChange={set('patientClass')} siteId={siteId} />
      <TextField
        label="E-mail"
        type="email"
        value={typed.email}
        onChange={set('email')}
        error={error('email')}
        hint="Quotes and receipts go there"
        autoComplete="off"
      />
      <TextField
        label="Telephone"
        type="tel"
        value={typed.phone}
        onChange={set('phone')}
        error={error('phone')}
        autoComplete="off"
      />
    </div>
  );
}

/** Which prices a patient's quotes begin with; a list that has left the book is still shown. */
function PriceClass({
  value,
  onChange,
  siteId,
}: {
  readonly value: string;
  readonly onChange: (value: string) => void;
  readonly siteId: number;
}) {
  const { data } = useQuery(procedureNamesQuery(siteId));
  const lists = data?.book.priceLists ?? [];
  const known = value === 'standard' || lists.some((list) => list.id === value);
  return (
    <SelectField
      label="Prices"
      value={value}
      onChange={onChange}
      choices={[
        { value: 'standard', label: 'Standard prices' },
        ...lists.map((list) => ({ value: list.id, label: list.label })),
        ...(known ? [] : [{ value, label: value }]),
      ]}
    />
  );
}
