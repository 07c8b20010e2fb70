import type { Duty, FeedCourse } from "../model/duty.js";

/** A value over time: straight between knots, its first value before and its last after. Two knots at a time are a jump. */
export interface Line {
  /** s, ascending. */
  readonly times: Float64Array;
  readonly values: Float64Array;
}

/** @param otherwise what an upset goes to in place of the duty's */
export function lineOf(course: FeedCourse, before: number, otherwise: number | undefined): Line {
  if (course.is === "logged") return course;
  const to = otherwise ?? course.to.of([]);
  const { start, lasting } = course;
  if (lasting === undefined) return { times: Float64Array.of(start, start), values: Float64Array.of(before, to) };
  const end = start + lasting;
  return { times: Float64Array.of(start, start, end, end), values: Float64Array.of(before, to, to, before) };
}

/** Just before a time, or from it on. */
export function lineAt({ times, values }: Line, t: number, side: number): number {
  let k = -1;
  while (k + 1 < times.length && (side > 0 ? times[k + 1] <= t : times[k + 1] < t)) k++;
  if (k < 0) return values[0];
  if (k + 1 >= times.length) return values[k];
  return values[k] + ((values[k + 1] - values[k]) * (t - times[k])) / (times[k + 1] - times[k]);
}

const coursesOf = (duty: Duty): readonly FeedCourse[] => [
  ...[...duty.feeds.values()].flatMap((f) => [...(f.courses?.values() ?? [])]),
  ...(duty.flowCourses?.values() ?? []),
];

/** True where a duty has something that changes in time. */
export const changes = (duty: Duty): boolean => coursesOf(duty).length > 0;

/** Is everything that changes in the end as it was before? */
export const comesBack = (duty: Duty): boolean =>
  changes(duty) && coursesOf(duty).every((course) => course.is === "upset" && course.lasting !== undefined);

/** When what is fed changes for the last time, s; 0 where it does not. */
export function lastChange(duty: Duty): number {
  return coursesOf(duty).reduce((late, course) => {
    const end = course.is === "upset" ? course.start + (course.lasting ?? 0) : course.times[course.times.length - 1];
    return Math.max(late, end);
  }, 0);
}
