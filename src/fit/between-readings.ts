import { linearTheory } from "./covariance.js";
import { fullJacobian } from "./jacobian.js";
import type { Evaluation, Problem } from "./problem.js";

/** Halvings of a sampling gap in which the end of a flat stretch is sought. */
const halvings = 6;

/**
 * Where a front lies between two readings the data hardly tell where: the sum of squares is all but flat from one reading to the
 * next and steps up there. Such an optimum stands for the whole stretch between the steps, as far as its own standard error in
 * the stretch (`t` of them to both sides) is no narrower.
 * @param j        the coordinate that moves the front; the others follow it as linear theory has it
 * @param gap      what moves the front by one sampling gap; nothing is sought farther away
 * @param variance of one weighted residual
 * @returns both ends, u of the coordinate; the optimum itself where the data tell it better than that
 */
export function betweenReadings(
  problem: Problem,
  x: Float64Array,
  at: Evaluation,
  { j, gap, variance, t }: { readonly j: number; readonly gap: number; readonly variance: number; readonly t: number },
): readonly [number, number] {
  const alone = [x[j], x[j]] as const;
  const { inverse, n } = linearTheory(fullJacobian(problem, x, at));
  const error = Math.sqrt(variance * inverse[j * n + j]);
  if (!(error > 0) || t * error >= 1e3 * gap) return alone;
  const along = Float64Array.from(x, (_, i) => inverse[i * n + j] / inverse[j * n + j]);
  const { coordinates } = problem.setup;
  const flat = (by: number): boolean => {
    const point = x.map((u, i) => u + by * along[i]);
    if (coordinates.some(({ from, to }, i) => point[i] < from || point[i] > to)) return false;
    const rise = (problem.evaluate(point)?.ofAll ?? Number.POSITIVE_INFINITY) - at.ofAll;
    return rise <= variance * (1 + 2 * (by / error) ** 2);
  };
  const reach = (side: -1 | 1): number => {
    if (flat(side * gap)) return gap;
    let [inside, outside] = [0, gap];
    for (let k = 0; k < halvings; k++) {
      const middle = (inside + outside) / 2;
      if (flat(side * middle)) inside = middle;
      else outside = middle;
    }
    return inside;
  };
  const [down, up] = [reach(-1), reach(1)];
  return 2 * t * error >= down + up ? [x[j] - down, x[j] + up] : alone;
}
