import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import type { ProblemError } from '#client/api/problem-error.ts';
import { Button } from '#client/ui/button.tsx';
import { Dialog } from '#client/ui/dialog.tsx';
import { EYE_NAMES } from '#client/ui/eye-columns.tsx';
import { CheckField, DateField } from '#client/ui/fields.tsx';
import { Skeleton } from '#client/ui/states.tsx';
import type { PatientView } from '#contract/patients';
import { EYES, type Eye } from '#domain/eye';
import { addDays } from '#domain/time/index';
import { procedureNamesQuery, useApprovePlan } from './queries.ts';

/** Ninety days, as the server assumes where nothing is said. */
const GOOD_FOR_DAYS = 90;

/** The surgeon's own act: which procedures may be quoted for each eye, and until when. */
export function ApprovePlanDialog({
  patient,
  onClose,
  onApproved,
}: {
  readonly patient: PatientView;
  readonly onClose: () => void;
  readonly onApproved: () => void;
}) {
  const approve = useApprovePlan();
  const { data } = useQuery(procedureNamesQuery(patient.siteId));
  const last = patient.plans[0]?.procedureIds;
  const [chosen, setChosen] = useState<Readonly<Record<Eye, readonly string[]>>>({
    OD: last?.OD ?? [],
    OS: last?.OS ?? [],
  });
  const [expiresOn, setExpiresOn] = useState<string>(addDays(patient.today, GOOD_FOR_DAYS));
  const problem = approve.error as ProblemError | null;
  const tick = (eye: Eye, id: string, on: boolean): void =>
    setChosen((before) => ({
      ...before,
      [eye]: on ? [...before[eye], id] : before[eye].filter((each) => each !== id),
    }));
  return (
    <Dialog title={`Plan for ${patient.givenName} ${patient.familyName}`} open onClose={onClose}>
      <p className="mb-4 text-soft">What may be quoted for each eye. It replaces every plan before it.</p>
      <div className="grid gap-6 sm:grid-cols-2">
        {EYES.map((eye) => (
          <fieldset key={eye}>
            <legend className="mb-2 font-extrabold">{EYE_NAMES[eye]}</legend>
            {data === undefined ? <Skeleton rows={3} /> : null}
            {data?.book.procedures.map((procedure) => (
              <CheckField
                key={procedure.id}
                label={procedure.label}
                checked={chosen[eye].includes(procedure.id)}
                onChange={(on) => tick(eye, procedure.id, on)}
              />
            ))}
            {problem?.fieldMessage(eye) ? (
              <p role="alert" className="mt-1 text-small font-semibold text-bengal">
                {problem.fieldMessage(eye)}
              </p>
            ) : null}
          </fieldset>
        ))}
      </div>
      <DateField
        label="Good until"
        value={expiresOn}
        min={patient.today}
        onChange={setExpiresOn}
        error={problem?.fieldMessage('expiresOn')}
        className="mt-4 max-w-48"
      />
      {problem && problem.fields.length === 0 ? (
        <p role="alert" className="mt-4 font-semibold text-bengal">
          {problem.message}
        </p>
      ) : null}
      <div className="mt-6 flex flex-wrap gap-3">
        <Button
          kind="primary"
          sending={approve.isPending}
          onPress={() =>
            approve.mutate(
              {
                params: { patientId: patient.patientId },
                body: { OD: [...chosen.OD], OS: [...chosen.OS], expiresOn },
              },
              { onSuccess: onApproved },
            )
          }
        >
          Approve this plan
        </Button>
        <Button kind="quiet" onPress={onClose}>
          Leave it
        </Button>
      </div>
    </Dialog>
  );
}
