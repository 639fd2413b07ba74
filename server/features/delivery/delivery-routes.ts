import { markEyeDone, recordVisit } from '#contract/delivery';
import { readCourse } from '#server/features/courses/index';
import { type BoundRoute, route } from '#server/http/route';
import type { Deps } from '#server/platform/deps';
import { recordEyeDone } from './mark-eye-done.ts';
import { recordFollowUpVisit } from './record-visit.ts';

export function deliveryRoutes(deps: Deps): BoundRoute[] {
  return [
    route(markEyeDone, async ({ params, body, actor }) => {
      await recordEyeDone(deps, {
        ...params,
        doneOn: body.doneOn,
        overrideReason: body.overrideReason,
        actor,
      });
      return await readCourse(deps, params.courseId);
    }),
    route(recordVisit, async ({ params, body, actor }) => {
      await recordFollowUpVisit(deps, params.courseId, body.visitedOn, actor);
      return await readCourse(deps, params.courseId);
    }),
  ];
}
