import { useQuery } from '@tanstack/react-query';
import { Button } from '#client/ui/button.tsx';
import { EyeColumns } from '#client/ui/eye-columns.tsx';
import { StateWord } from '#client/ui/states.tsx';
import type { PatientView, PrescriptionRecord } from '#contract/patients';
import type { Eye } from '#domain/eye';
import { formatPower, formatPrescription, strongestMeridianMd, transpose } from '#domain/prescription/index';
import { formatDay } from '#domain/time/index';
import { procedureNamesQuery } from './queries.ts';

/** Both eyes side by side: the newest refraction in both forms, what the surgeon approved, and what was before. */
export function EyesSection({
  patient,
  onRefraction,
  onPlan,
}: {
  readonly patient: PatientView;
  readonly onRefraction: (() => void) | undefined;
  readonly onPlan: (() => void) | undefined;
}) {
  const done = patient.courses.flatMap((course) =>
    course.eyes.filter((each) => each.state === 'done').map((each) => each.eye),
  );
  return (
    <section aria-label="Eyes">
      <EyeColumns done={done}>{(eye) => <OneEye patient={patient} eye={eye} />}</EyeColumns>
      <div className="flex flex-wrap items-center justify-between gap-3 border-y border-rule py-3">
        <PlanWords patient={patient} />
        <div className="flex flex-wrap gap-3">
          {onRefraction ? <Button onPress={onRefraction}>Record refraction</Button> : null}
          {onPlan ? <Button onPress={onPlan}>Approve plan</Button> : null}
        </div>
      </div>
    </section>
  );
}

function PlanWords({ patient }: { readonly patient: PatientView }) {
  const [plan] = patient.plans;
  if (!plan) {
    return (
      <p>
        <StateWord tone="waiting">no approved plan</StateWord>{' '}
        <span className="text-soft">A quote is an estimate until a surgeon approves one.</span>
      </p>
    );
  }
  return (
    <p>
      <StateWord tone={plan.good ? 'settled' : 'waiting'}>
        {plan.good ? 'plan approved' : 'plan has ended'}
      </StateWord>{' '}
      <span className="text-soft">
        by {plan.surgeonName} on {formatDay(plan.approvedOn)}, good until {formatDay(plan.expiresOn)}
      </span>
    </p>
  );
}

function OneEye({ patient, eye }: { readonly patient: PatientView; readonly eye: Eye }) {
  const [newest, ...earlier] = patient.prescriptions.filter((each) => each.eye === eye);
  const { data } = useQuery(procedureNamesQuery(patient.siteId));
  const approved = patient.plans[0]?.procedureIds[eye] ?? [];
  const nameOf = (id: string) => data?.book.procedures.find((each) => each.id === id)?.label ?? id;
  return (
    <>
      {newest ? <Refraction record={newest} /> : <p className="text-soft">No refraction recorded yet.</p>}
      <p className="mt-3">
        {approved.length > 0 ? (
          approved.map(nameOf).join(', ')
        ) : (
          <span className="text-soft">No procedure approved for this eye.</span>
        )}
      </p>
      {earlier.length > 0 ? (
        <details className="mt-3 text-small">
          <summary className="min-h-6 cursor-pointer text-trypan">
            {earlier.length === 1 ? 'One refraction before' : `${earlier.length} refractions before`}
          </summary>
          <ul className="mt-1">
            {earlier.map((record) => (
              <li
                key={record.prescriptionId}
                className="flex flex-wrap justify-between gap-x-4 border-b border-rule py-1"
              >
                <span className="tabular">{formatPrescription(record.typed)}</span>
                <span className="text-soft">
                  {formatDay(record.refractedOn)}, {record.recordedBy}
                </span>
              </li>
            ))}
          </ul>
        </details>
      ) : null}
    </>
  );
}

function Refraction({ record }: { readonly record: PrescriptionRecord }) {
  const typed = { ...record.typed, vertexMm: record.vertexMm };
  const other = transpose(typed);
  return (
    <>
      <p className="tabular text-title font-extrabold">{formatPrescription(typed)}</p>
      <p className="tabular text-small text-soft">
        {other === typed ? '' : `also ${formatPrescription(other)} · `}
        strongest meridian {formatPower(strongestMeridianMd(typed))} · vertex {record.vertexMm} mm
      </p>
      <p className="text-small text-soft">
        refracted {formatDay(record.refractedOn)}, recorded by {record.recordedBy}
      </p>
    </>
  );
}
