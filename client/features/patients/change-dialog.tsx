import { useState } from 'react';
import type { ProblemError } from '#client/api/problem-error.ts';
import { Button } from '#client/ui/button.tsx';
import { Dialog } from '#client/ui/dialog.tsx';
import type { PatientView } from '#contract/patients';
import { type Particulars, ParticularsFields, particularsBody } from './particulars-fields.tsx';
import { useChangePatient } from './queries.ts';

/** Corrects particulars on the version that was read; somebody else's change is never written over. */
export function ChangeDialog({
  patient,
  onClose,
  onChanged,
}: {
  readonly patient: PatientView;
  readonly onClose: () => void;
  readonly onChanged: () => void;
}) {
  const change = useChangePatient();
  const [version] = useState(patient.version);
  const [typed, setTyped] = useState<Particulars>({
    givenName: patient.givenName,
    familyName: patient.familyName,
    bornOn: patient.bornOn,
    email: patient.email ?? '',
    phone: patient.phone ?? '',
    patientClass: patient.patientClass,
  });
  const problem = change.error as ProblemError | null;
  return (
    <Dialog title="Correct particulars" open onClose={onClose}>
      <form
        onSubmit={(event) => {
          event.preventDefault();
          change.mutate(
            { params: { patientId: patient.patientId }, body: { ...particularsBody(typed), version } },
            { onSuccess: onChanged },
          );
        }}
      >
        <ParticularsFields typed={typed} onType={setTyped} problem={problem} siteId={patient.siteId} />
        {problem && problem.fields.length === 0 ? (
          <p role="alert" className="mt-4 font-semibold text-bengal">
            {problem.message}
          </p>
        ) : null}
        <div className="mt-6 flex flex-wrap gap-3">
          <Button kind="primary" type="submit" sending={change.isPending}>
            Save
          </Button>
          <Button kind="quiet" onPress={onClose}>
            Leave it
          </Button>
        </div>
      </form>
    </Dialog>
  );
}
