import type { CourseInput, EyeWish } from '#domain/pricing/index';
import { addDays, clinicDate } from '#domain/time/index';
import { rx } from './prescriptions.ts';

export const QUOTED_ON = clinicDate('2026-03-12');
export const SURGERY_ON = clinicDate('2026-04-16');

/** An eye as a table of cases writes it: "lasik −3.00 DS". */
export function eye(text: string, coverId: string | null = null): EyeWish {
  const [procedureId = '', ...prescription] = text.split(' ');
  return { procedureId, prescription: rx(prescription.join(' ')), coverId };
}

/** Both eyes LASIK on one day, −3.00 and −2.50, nothing else; overridden where a case says so. */
export function courseInput(overrides: Partial<CourseInput> = {}): CourseInput {
  return {
    quotedOn: QUOTED_ON,
    acceptedOn: null,
    priceListId: null,
    eyes: { OD: eye('lasik -3.00'), OS: eye('lasik -2.50') },
    surgery: { plan: 'same_session', on: SURGERY_ON },
    approvedPlan: null,
    addOns: [],
    packageId: null,
    discounts: [],
    paymentPlanId: null,
    ...overrides,
  };
}

/** Right eye on the usual day, left eye some days later. */
export function staged(daysApart: number): CourseInput['surgery'] {
  return { plan: 'staged', on: { OD: SURGERY_ON, OS: addDays(SURGERY_ON, daysApart) } };
}
