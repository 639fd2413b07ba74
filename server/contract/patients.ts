import { z } from 'zod';
import { pairEyeSchema } from './courses.ts';
import { defineContract, staff } from './define.ts';
import {
  amountField,
  currencyField,
  dayField,
  emailField,
  eyeField,
  idField,
  instantField,
  lineField,
} from './fields.ts';

const READERS = staff('counsellor', 'front_desk', 'surgeon', 'manager', 'auditor');
const WRITERS = staff('counsellor', 'front_desk', 'manager');
const patientParams = z.object({ patientId: idField });

const patientFields = {
  givenName: lineField(80),
  familyName: lineField(80),
  bornOn: dayField,
  email: emailField.nullable(),
  phone: lineField(40).nullable(),
  /** 'standard', or the id of a price list of the price book ("hospital-staff"). */
  patientClass: lineField(30).default('standard'),
};

/** An eye's pair mark in one course of care, with the course it belongs to. */
export const courseMarkSchema = z
  .object({
    courseId: idField,
    number: z.string(),
    acceptedOn: dayField,
    currency: currencyField,
    totalMinor: amountField,
    paidMinor: amountField,
    eyes: z.array(
      pairEyeSchema.extend({
        procedure: z.string(),
        plannedOn: dayField.nullable(),
        doneOn: dayField.nullable(),
      }),
    ),
  })
  .meta({ id: 'CourseMark' });

export const patientSummarySchema = z
  .object({
    patientId: idField,
    siteId: idField,
    givenName: z.string(),
    familyName: z.string(),
    bornOn: dayField,
    email: z.string().nullable(),
    phone: z.string().nullable(),
    /** The newest course of care, else null. */
    course: courseMarkSchema.nullable(),
    /** The newest quote, else null. */
    quote: z
      .object({
        quoteId: idField,
        number: z.string(),
        state: z.enum(['draft', 'issued', 'accepted', 'lapsed', 'withdrawn']),
      })
      .nullable(),
  })
  .meta({ id: 'PatientSummary' });

const prescriptionFormSchema = z.object({
  sphereMd: z.int(),
  cylinderMd: z.int().nullable(),
  axisDeg: z.int().nullable(),
});

export const prescriptionRecordSchema = z
  .object({
    prescriptionId: idField,
    eye: eyeField,
    /** Milli-dioptres, in the cylinder sign it was typed in. */
    typed: prescriptionFormSchema,
    /** The minus-cylinder form that bands look at. */
    minusForm: prescriptionFormSchema,
    vertexMm: z.int(),
    refractedOn: dayField,
    recordedBy: z.string(),
    recordedAt: instantField,
  })
  .meta({ id: 'PrescriptionRecord' });

export const approvedPlanSchema = z
  .object({
    approvedPlanId: idField,
    surgeonUserId: idField,
    surgeonName: z.string(),
    approvedOn: dayField,
    expiresOn: dayField,
    /** Rule ids of the price book's procedures. */
    procedureIds: z.object({ OD: z.array(z.string()), OS: z.array(z.string()) }),
    good: z.boolean(),
  })
  .meta({ id: 'ApprovedPlan' });

export const patientSchema = patientSummarySchema
  .omit({ course: true, quote: true })
  .extend({
    patientClass: z.string(),
    version: z.int(),
    createdAt: instantField,
    today: dayField,
    /** Newest first. */
    prescriptions: z.array(prescriptionRecordSchema),
    /** Newest first; only the first counts, and only while it is good. */
    plans: z.array(approvedPlanSchema),
    quotes: z.array(
      z.object({
        quoteId: idField,
        number: z.string(),
        state: z.enum(['draft', 'issued', 'accepted', 'lapsed', 'withdrawn']),
        changedAt: instantField,
        currency: currencyField.nullable(),
        /** Totals of the options of the newest issued version. */
        totalsMinor: z.array(amountField),
        validUntil: dayField.nullable(),
        counsellor: z.string(),
      }),
    ),
    courses: z.array(courseMarkSchema),
  })
  .meta({ id: 'Patient' });

export type PatientView = z.output<typeof patientSchema>;
export type PatientSummary = z.output<typeof patientSummarySchema>;
export type PrescriptionRecord = z.output<typeof prescriptionRecordSchema>;
export type ApprovedPlanView = z.output<typeof approvedPlanSchema>;
export type CourseMark = z.output<typeof courseMarkSchema>;

export const listPatients = defineContract({
  id: 'listPatients',
  summary: 'Patients of one’s sites; q looks at names, date of birth and e-mail address',
  method: 'get',
  path: '/api/patients',
  access: READERS,
  query: z.object({ q: z.string().trim().max(120).optional(), siteId: idField.optional() }),
  response: z.object({
    patients: z.array(patientSummarySchema),
    /** True when there are more than are listed: look for something narrower. */
    more: z.boolean(),
  }),
});

export const getPatient = defineContract({
  id: 'getPatient',
  summary: 'One patient: prescriptions, approved plans, quotes, courses of care',
  method: 'get',
  path: '/api/patients/:patientId',
  access: READERS,
  params: patientParams,
  response: patientSchema,
});

export const createPatient = defineContract({
  id: 'createPatient',
  summary: 'Take up a patient at a site',
  method: 'post',
  path: '/api/patients',
  access: WRITERS,
  body: z.strictObject({
    siteId: idField,
    ...patientFields,
    /** True once somebody has seen that a patient of this name and date of birth is there already. */
    evenSo: z.boolean().default(false),
  }),
  response: patientSchema,
  status: 201,
  problems: ['conflict'],
});

export const changePatient = defineContract({
  id: 'changePatient',
  summary: 'Correct a patient’s particulars; refused when somebody else changed them meanwhile',
  method: 'put',
  path: '/api/patients/:patientId',
  access: WRITERS,
  params: patientParams,
  body: z.strictObject({ ...patientFields, version: z.int() }),
  response: patientSchema,
  problems: ['conflict'],
});

const prescriptionFields = z
  .strictObject({
    sphere: z.string().max(20),
    cylinder: z.string().max(20).default(''),
    axis: z.string().max(20).default(''),
    vertex: z.string().max(20).default(''),
  })
  .meta({ id: 'PrescriptionFields' });

export const recordPrescription = defineContract({
  id: 'recordPrescription',
  summary: 'Record a refraction of one eye or both, typed in either cylinder sign ("-2.50", "+1.25", "90")',
  method: 'post',
  path: '/api/patients/:patientId/prescriptions',
  access: staff('counsellor', 'surgeon', 'manager'),
  params: patientParams,
  body: z.strictObject({
    refractedOn: dayField,
    OD: prescriptionFields.nullable(),
    OS: prescriptionFields.nullable(),
  }),
  response: patientSchema,
  status: 201,
  problems: ['refused'],
});

export const approvePlan = defineContract({
  id: 'approvePlan',
  summary:
    'The surgeon names the procedures that may be quoted for each eye, and until when (default 90 days)',
  method: 'post',
  path: '/api/patients/:patientId/plans',
  access: staff('surgeon'),
  params: patientParams,
  body: z.strictObject({
    OD: z.array(lineField(64)).max(20),
    OS: z.array(lineField(64)).max(20),
    expiresOn: dayField.optional(),
  }),
  response: patientSchema,
  status: 201,
  problems: ['refused'],
});
