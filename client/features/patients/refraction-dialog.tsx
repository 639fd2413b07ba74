import { useState } from 'react';
import type { ProblemError } from '#client/api/problem-error.ts';
import { Button } from '#client/ui/button.tsx';
import { Dialog } from '#client/ui/dialog.tsx';
import { EYE_NAMES } from '#client/ui/eye-columns.tsx';
import { DateField } from '#client/ui/fields.tsx';
import { PrescriptionFields } from '#client/ui/prescription-fields.tsx';
import type { PatientView } from '#contract/patients';
import { EYES, type Eye } from '#domain/eye';
import type { PrescriptionField, PrescriptionFields as Typed } from '#domain/prescription/index';
import { useRecordPrescription } from './queries.ts';

const NOTHING: Typed = { sphere: '', cylinder: '', axis: '', vertex: '' };
const FIELDS: readonly PrescriptionField[] = ['sphere', 'cylinder', 'axis', 'vertex'];

/** Records a refraction of one eye or both, typed in either sign; an eye left empty is not recorded. */
export function RefractionDialog({
  patient,
  onClose,
  onRecorded,
}: {
  readonly patient: PatientView;
  readonly onClose: () => void;
  readonly onRecorded: () => void;
}) {
  const record = useRecordPrescription();
  const [refractedOn, setRefractedOn] = useState<string>(patient.today);
  const [typed, setTyped] = useState<Readonly<Record<Eye, Typed>>>({ OD: NOTHING, OS: NOTHING });
  const problem = record.error as ProblemError | null;
  const given = (eye: Eye) => (FIELDS.some((field) => typed[eye][field].trim() !== '') ? typed[eye] : null);
  const errorsOf = (eye: Eye) =>
    Object.fromEntries(FIELDS.map((field) => [field, problem?.fieldMessage(`${eye}.${field}`)]));
  const words =
    problem && !problem.fields.some(({ field }) => /^O[DS]\.|refractedOn/.test(field))
      ? problem.message
      : null;
  return (
    <Dialog title={`Refraction of ${patient.givenName} ${patient.familyName}`} open onClose={onClose}>
      <form
        onSubmit={(event) => {
          event.preventDefault();
          record.mutate(
            {
              params: { patientId: patient.patientId },
              body: { refractedOn, OD: given('OD'), OS: given('OS') },
            },
            { onSuccess: onRecorded },
          );
        }}
      >
        <p className="mb-4 text-soft">
          Either cylinder sign; “pl” for plano. An eye left empty is not recorded.
        </p>
        {EYES.map((eye) => (
          <fieldset key={eye} className="mb-4 border-t border-rule pt-3">
            <legend className="pr-3 font-extrabold">
              {EYE_NAMES[eye]} <span className="text-small font-normal text-soft">{eye}</span>
            </legend>
            <PrescriptionFields
              typed={typed[eye]}
              errors={errorsOf(eye)}
              onType={(field, text) =>
                setTyped((before) => ({ ...before, [eye]: { ...before[eye], [field]: text } }))
              }
            />
          </fieldset>
        ))}
        <DateField
          label="Refracted on"
          value={refractedOn}
          max={patient.today}
          onChange={setRefractedOn}
          error={problem?.fieldMessage('refractedOn')}
          className="max-w-48"
        />
        {words ? (
          <p role="alert" className="mt-4 font-semibold text-bengal">
            {words}
          </p>
        ) : null}
        <div className="mt-6 flex flex-wrap gap-3">
          <Button kind="primary" type="submit" sending={record.isPending}>
            Record
          </Button>
          <Button kind="quiet" onPress={onClose}>
            Leave it
          </Button>
        </div>
      </form>
    </Dialog>
  );
}
