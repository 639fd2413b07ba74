import { z } from 'zod';
import { defineContract } from './define.ts';

export const getHealth = defineContract({
  id: 'getHealth',
  summary: 'The process lives',
  method: 'get',
  path: '/api/health',
  access: { kind: 'public' },
  response: z.object({ status: z.literal('alive') }),
});

export const getReadiness = defineContract({
  id: 'getReadiness',
  summary: 'The process can serve: the database answers',
  method: 'get',
  path: '/api/ready',
  access: { kind: 'public' },
  response: z.object({ status: z.literal('ready') }),
  problems: ['unavailable'],
});

export const getOpenApi = defineContract({
  id: 'getOpenApi',
  summary: 'This interface described as OpenAPI 3.1',
  method: 'get',
  path: '/api/openapi.json',
  access: { kind: 'public' },
  response: z.looseObject({ openapi: z.string() }),
});
