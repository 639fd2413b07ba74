import { getCourse } from '#contract/courses';
import { type BoundRoute, route } from '#server/http/route';
import { mustWorkAt } from '#server/platform/actor';
import type { Deps } from '#server/platform/deps';
import { notFound } from '#server/platform/problem';
import { courseOf } from './course-repository.ts';
import { readCourse } from './courses-read.ts';

export function coursesRoutes(deps: Deps): BoundRoute[] {
  return [
    route(getCourse, async ({ params, actor }) => {
      const course = await courseOf(deps.db, params.courseId);
      if (!course) throw notFound('course');
      mustWorkAt(actor, course.siteId, 'course');
      return await readCourse(deps, course.courseId);
    }),
  ];
}
