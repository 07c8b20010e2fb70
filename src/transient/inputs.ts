import type { Plant } from "../compile/plant.js";
import type { Duty, FeedCourse } from "../model/duty.js";
import type { Conditions, DutySettings } from "../reaction/conditions.js";
import { lineAt, lineOf } from "./course-line.js";
import { FeedSignal } from "./feed-signal.js";

/**
 * What each feed of a plant brings over time, scaled.
 * @param kinks when flows kink or jump, s
 */
export function feedSignals(
  plant: Plant,
  { species, feeds, scale }: Conditions,
  duty: Duty,
  settings: DutySettings,
  kinks: Float64Array,
): FeedSignal[] {
  return plant.feeds.map(({ name }, k) => {
    const base = scale.map((s, i) => (feeds[k][i] ?? 0) / s);
    const courses = duty.feeds.get(name)?.courses ?? new Map<string, FeedCourse>();
    const lines = [...courses].map(([of, course]) => {
      const i = of === "temperature" ? species.length : species.indexOf(of);
      return { i, line: lineOf(course, feeds[k][i], settings[`${name}.${of}.to`]), scale: scale[i] };
    });
    const times = [...new Set(lines.flatMap(({ line }) => [...line.times]))].sort((a, b) => a - b);
    if (times.length === 0) return new FeedSignal(Float64Array.of(0), [base], kinks);
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
    return new FeedSignal(Float64Array.from(knots), levels, kinks);
  });
}
