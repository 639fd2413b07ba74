export { type CourseMoney, courseMoney, unpaidOf } from './course-money.ts';
export {
  type CourseDueRow,
  type CourseEyeRow,
  type CourseRow,
  courseDues,
  courseEyes,
  courseOf,
  coursePaid,
  type EyeState,
  lockCourse,
} from './course-repository.ts';
export { readCourse } from './courses-read.ts';
export { coursesRoutes } from './courses-routes.ts';
export { type AcceptedOption, openCourse } from './open-course.ts';
