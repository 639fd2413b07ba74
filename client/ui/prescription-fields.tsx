import { useId, useState } from 'react';
import {
  formatPower,
  formatPrescription,
  type PrescriptionField,
  parsePrescriptionFields,
  strongestMeridianMd,
  type PrescriptionFields as Typed,
  transpose,
} from '#domain/prescription/index';
import { TextField } from './fields.tsx';

/** A prescription's other form and what the bands look at: "also −3.50 +1.50 × 165 · strongest meridian −3.50". */
export function echoWords(typed: Typed): string | null {
  const read = parsePrescriptionFields(typed);
  if (!read.ok) return null;
  const { prescription } = read;
  const meridian = `strongest meridian ${formatPower(strongestMeridianMd(prescription))}`;
  const other = transpose(prescription);
  return other === prescription ? meridian : `also ${formatPrescription(other)} · ${meridian}`;
}

const FIELDS: readonly {
  readonly field: PrescriptionField;
  readonly label: string;
  readonly width: string;
}[] = [
  { field: 'sphere', label: 'Sphere', width: 'col-span-2' },
  { field: 'cylinder', label: 'Cylinder', width: 'col-span-2' },
  { field: 'axis', label: 'Axis', width: 'col-span-2 sm:col-span-1 md:col-span-2 lg:col-span-1' },
  { field: 'vertex', label: 'Vertex', width: 'col-span-2 sm:col-span-1 md:col-span-2 lg:col-span-1' },
];

/**
 * One eye's prescription typed in either cylinder sign, its other form echoed under it. What does not read is told once a field
 * is left, or at once with `showAll`.
 */
export function PrescriptionFields({
  typed,
  onType,
  errors = {},
  showAll = false,
  disabled = false,
}: {
  readonly typed: Typed;
  readonly onType: (field: PrescriptionField, text: string) => void;
  /** From elsewhere, such as the engine or the server, by field. */
  readonly errors?: Readonly<Partial<Record<PrescriptionField, string>>>;
  readonly showAll?: boolean;
  readonly disabled?: boolean;
}) {
  const id = useId();
  const [left, setLeft] = useState<ReadonlySet<PrescriptionField>>(new Set());
  const read = parsePrescriptionFields(typed);
  const wordsFor = (field: PrescriptionField): string | undefined => {
    const own = read.ok ? undefined : read.refusals.find((each) => each.field === field);
    if (own && (showAll || left.has(field))) return `${own.words} ${own.change}`;
    return errors[field];
  };
  const wrong = FIELDS.filter(({ field }) => wordsFor(field) !== undefined);
  return (
    <div>
      <div className="grid grid-cols-4 gap-3 sm:grid-cols-6 md:grid-cols-4 lg:grid-cols-6">
        {FIELDS.map(({ field, label, width }) => (
          <TextField
            key={field}
            label={label}
            value={typed[field]}
            placeholder={field === 'vertex' ? '12' : ''}
            disabled={disabled}
            autoComplete="off"
            className={width}
            aria-invalid={wordsFor(field) === undefined ? undefined : true}
            aria-describedby={wordsFor(field) === undefined ? undefined : `${id}-${field}`}
            onChange={(text) => onType(field, text)}
            onBlur={() => setLeft((before) => new Set(before).add(field))}
          />
        ))}
      </div>
      {wrong.map(({ field }) => (
        <p
          key={field}
          id={`${id}-${field}`}
          role="alert"
          className="mt-1 text-small font-semibold text-bengal"
        >
          {wordsFor(field)}
        </p>
      ))}
      <p className="mt-1 min-h-5 text-small text-soft" aria-live="polite">
        {echoWords(typed)}
      </p>
    </div>
  );
}
