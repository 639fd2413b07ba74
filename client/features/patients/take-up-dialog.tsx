import { useState } from 'react';
import type { ProblemError } from '#client/api/problem-error.ts';
import { Button } from '#client/ui/button.tsx';
import { Dialog } from '#client/ui/dialog.tsx';
import { useSite } from '#client/ui/site.tsx';
import { type Particulars, ParticularsFields, particularsBody } from './particulars-fields.tsx';
import { useCreatePatient } from './queries.ts';

const NOBODY: Particulars = {
  givenName: '',
  familyName: '',
  bornOn: '',
  email: '',
  phone: '',
  patientClass: 'standard',
};

/** Takes up a patient at the site at hand; one of the same name and birthday is asked about first. */
export function TakeUpDialog({
  onClose,
  onTakenUp,
}: {
  readonly onClose: () => void;
  readonly onTakenUp: (patientId: number) => void;
}) {
  const site = useSite();
  const create = useCreatePatient();
  const [typed, setTyped] = useState(NOBODY);
  const problem = create.error as ProblemError | null;
  const twin = problem?.reason === 'patient_exists';
  const send = (evenSo: boolean): void =>
    create.mutate(
      { body: { siteId: site.siteId, ...particularsBody(typed), evenSo } },
      { onSuccess: (patient) => onTakenUp(patient.patientId) },
    );
  return (
    <Dialog title={`New patient at ${site.name}`} open onClose={onClose}>
      <form
        onSubmit={(event) => {
          event.preventDefault();
          send(false);
        }}
      >
        <ParticularsFields typed={typed} onType={setTyped} problem={problem} siteId={site.siteId} />
        {problem && problem.fields.length === 0 ? (
          <p role="alert" className="mt-4 font-semibold text-bengal">
            {problem.message}
          </p>
        ) : null}
        <div className="mt-6 flex flex-wrap gap-3">
          <Button kind="primary" type="submit" sending={create.isPending && !twin}>
            Take up
          </Button>
          {twin ? <Button onPress={() => send(true)}>Take up a second person</Button> : null}
          <Button kind="quiet" onPress={onClose}>
            Leave it
          </Button>
        </div>
      </form>
    </Dialog>
  );
}
