import type { Plant } from "../compile/plant.js";
import type { Duty, FeedCourse } from "../model/duty.js";
import type { Conditions, DutySettings } from "../reaction/conditions.js";
import { FeedSignal } from "./feed-signal.js";

/** True where a duty has something that changes in time. */
export const changes = (duty: Duty): boolean => [...duty.feeds.values()].some((f) => (f.courses?.size ?? 0) > 0);

/** What each feed of a plant brings over time, scaled. */
export function feedSignals(
  plant: Plant,
  { species, feeds, scale }: Conditions,
  duty: Duty,
  settings: DutySettings,
): FeedSignal[] {
  return plant.feeds.map(({ name }, k) => {
    const base = scale.map((s, i) => (feeds[k][i] ?? 0) / s);
    const courses = duty.feeds.get(name)?.courses ?? new Map<string, FeedCourse>();
    const lines = [...courses].map(([of, course]) => {
      const i = species.indexOf(of);
      return { i, line: lineOf(course, feeds[k][i], settings[`${name}.${of}.to`]), scale: scale[i] };
    });
    const times = [...new Set(lines.flatMap(({ line }) => [...line.times]))].sort((a, b) => a - b);
    if (times.length === 0) return new FeedSignal(Float64Array.of(0), [base]);
    const knots: number[] = [];
    const levels: Float64Array[] = [];
    for (const t of times) {
      const sides = [-1, 1].map((side) => {
        const level = base.slice();
        for (const { i, line, scale: s } of lines) level[i] = lineAt(line, t, side) / s;
        return level;
      });
      const jumps = sides[0].some((x, i) => x !== sides[1][i]);
      for (const level of jumps ? sides : [sides[1]]) {
        knots.push(t);
        levels.push(level);
      }
    }
    return new FeedSignal(Float64Array.from(knots), levels);
  });
}

interface Line {
  readonly times: Float64Array;
  readonly values: Float64Array;
}

function lineOf(course: FeedCourse, before: number, otherwise: number | undefined): Line {
  if (course.is === "logged") return course;
  const to = otherwise ?? course.to.of([]);
  const { start, lasting } = course;
  if (lasting === undefined) return { times: Float64Array.of(start, start), values: Float64Array.of(before, to) };
  const end = start + lasting;
  return { times: Float64Array.of(start, start, end, end), values: Float64Array.of(before, to, to, before) };
}

/** Just before a time, or from it on. */
function lineAt({ times, values }: Line, t: number, side: number): number {
  let k = -1;
  while (k + 1 < times.length && (side > 0 ? times[k + 1] <= t : times[k + 1] < t)) k++;
  if (k < 0) return values[0];
  if (k + 1 >= times.length) return values[k];
  return values[k] + ((values[k + 1] - values[k]) * (t - times[k])) / (times[k + 1] - times[k]);
}

/** When what is fed changes for the last time, s; 0 where it does not. */
export function lastChange(duty: Duty): number {
  const courses = [...duty.feeds.values()].flatMap((f) => [...(f.courses?.values() ?? [])]);
  return courses.reduce((late, course) => {
    const end = course.is === "upset" ? course.start + (course.lasting ?? 0) : course.times[course.times.length - 1];
    return Math.max(late, end);
  }, 0);
}
