import { useState } from 'react';
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
  { field: 'axis', label: 'Axis', width: 'col-span-2 sm:col-span-1' },
  { field: 'vertex', label: 'Vertex', width: 'col-span-2 sm:col-span-1' },
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
  const [left, setLeft] = useState<ReadonlySet<PrescriptionField>>(new Set());
  const read = parsePrescriptionFields(typed);
  const own = (field: PrescriptionField): string | undefined => {
    if (read.ok || !(showAll || left.has(field))) return undefined;
    const refusal = read.refusals.find((each) => each.field === field);
    return refusal ? `${refusal.words} ${refusal.change}` : undefined;
  };
  return (
    <div>
      <div className="grid grid-cols-4 gap-3 sm:grid-cols-6">
        {FIELDS.map(({ field, label, width }) => (
          <TextField
            key={field}
            label={label}
            value={typed[field]}
            placeholder={field === 'vertex' ? '12' : ''}
            disabled={disabled}
            inputMode="text"
            autoComplete="off"
            className={width}
            error={own(field) ?? errors[field]}
            onChange={(text) => onType(field, text)}
            onBlur={() => setLeft((before) => new Set(before).add(field))}
          />
        ))}
      </div>
      <p className="mt-1 min-h-5 text-small text-soft" aria-live="polite">
        {echoWords(typed)}
      </p>
    </div>
  );
}
