import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import { call } from '#client/api/call.ts';
import { getPricingBook } from '#contract/catalogue';
import type { ContractCall } from '#contract/define';
import {
  approvePlan,
  changePatient,
  createPatient,
  getPatient,
  listPatients,
  type PatientView,
  recordPrescription,
} from '#contract/patients';
import { createQuote } from '#contract/quotes';

export const patientsQuery = (q: string, siteId: number | undefined) =>
  queryOptions({
    queryKey: ['patients', q, siteId],
    queryFn: ({ signal }) => call(listPatients, { query: { q, siteId } }, signal),
    placeholderData: (before) => before,
  });

export const patientQuery = (patientId: number) =>
  queryOptions({
    queryKey: ['patient', patientId],
    queryFn: ({ signal }) => call(getPatient, { params: { patientId } }, signal),
  });

/** Names of procedures, as the site's book in force has them. */
export const procedureNamesQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['pricing-book', siteId],
    queryFn: ({ signal }) => call(getPricingBook, { params: { siteId } }, signal),
    staleTime: 300_000,
  });

/** A change to a patient: the answer is the whole page anew. */
function usePatientChange<Input>(change: (input: Input) => Promise<PatientView>) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: change,
    onSuccess: async (patient) => {
      client.setQueryData(patientQuery(patient.patientId).queryKey, patient);
      await client.invalidateQueries({ queryKey: ['patients'] });
    },
  });
}

export const useCreatePatient = () =>
  usePatientChange((input: ContractCall<typeof createPatient>) => call(createPatient, input));

export const useChangePatient = () =>
  usePatientChange((input: ContractCall<typeof changePatient>) => call(changePatient, input));

export const useRecordPrescription = () =>
  usePatientChange((input: ContractCall<typeof recordPrescription>) => call(recordPrescription, input));

export const useApprovePlan = () =>
  usePatientChange((input: ContractCall<typeof approvePlan>) => call(approvePlan, input));

/** Begins a quote for the patient; the page goes on to its sheet. */
export function useBeginQuote() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (patientId: number) => call(createQuote, { body: { patientId } }),
    onSuccess: (quote) => client.invalidateQueries({ queryKey: ['patient', quote.patient.patientId] }),
  });
}
