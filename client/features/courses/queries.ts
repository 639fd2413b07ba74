import { queryOptions } from '@tanstack/react-query';
import { call } from '#client/api/call.ts';
import { getCourse } from '#contract/courses';

/** A course of care as the server tells it. */
export const courseQuery = (courseId: number) =>
  queryOptions({
    queryKey: ['course', courseId],
    queryFn: ({ signal }) => call(getCourse, { params: { courseId } }, signal),
  });
