import { z } from 'zod';
import { ANY_STAFF, defineContract } from './define.ts';
import { currencyField, idField } from './fields.ts';

export const getClinic = defineContract({
  id: 'getClinic',
  summary: 'The clinic and the sites one works at',
  method: 'get',
  path: '/api/clinic',
  access: ANY_STAFF,
  response: z.object({
    name: z.string(),
    currency: currencyField,
    locale: z.string(),
    sites: z.array(
      z.object({
        siteId: idField,
        code: z.string(),
        name: z.string(),
        address: z.string(),
        zone: z.string(),
      }),
    ),
  }),
});
