import { z } from 'zod';
import { courseSchema } from './courses.ts';
import { defineContract, staff } from './define.ts';
import { dayField, eyeField, idField, reasonField } from './fields.ts';

export const markEyeDone = defineContract({
  id: 'markEyeDone',
  summary: 'Record that an eye was done: income is recognised and the surgeon’s fee accrues',
  method: 'post',
  path: '/api/courses/:courseId/eyes/:eye/done',
  access: staff('surgeon', 'front_desk', 'manager'),
  params: z.object({ courseId: idField, eye: eyeField }),
  body: z.strictObject({
    doneOn: dayField,
    /** The manager's reason for doing an eye whose share is not paid; what is missing stands as a receivable. */
    overrideReason: reasonField.optional(),
  }),
  response: courseSchema,
  problems: ['refused', 'conflict'],
});

export const recordVisit = defineContract({
  id: 'recordVisit',
  summary: 'Record the next follow-up visit of a course as used',
  method: 'post',
  path: '/api/courses/:courseId/visits',
  access: staff('front_desk', 'surgeon', 'manager'),
  params: z.object({ courseId: idField }),
  body: z.strictObject({ visitedOn: dayField }),
  response: courseSchema,
  problems: ['refused'],
});
