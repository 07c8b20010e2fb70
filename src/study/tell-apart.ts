import type { Settings } from "../compile/plant.js";
import { modelOf } from "../fit/model-of.js";
import type { Rival } from "../model/study.js";
import type { Trial } from "../model/trial.js";
import { type Candidate, candidatesFor } from "../plan/candidates.js";
import { trialOn } from "../resolve/trial-on.js";
import type { RivalDraws } from "./draws-of.js";
import type { Ranked, TellingTest } from "./result.js";

/** Draws of each rival that say how far its curve is open: enough for a spread. */
const fewDraws = 12;

/**
 * Further tests by how far apart the best two surviving rivals are on them, as each was fitted, the most telling first.
 * Neither is fitted anew to what the other would show: over tests of one sort the order holds, the number is on the high side.
 * @see G. Buzzi-Ferraris, P. Forzatti, Chem. Eng. Sci. 38 (1983) 225-232, and with G. Emig and H. Hofmann, 39 (1984) 81-85, for the criterion (from memory)
 */
export function tellingTests(
  survivors: readonly Ranked[],
  trials: readonly Trial[],
  draws: ReadonlyMap<Rival, RivalDraws>,
): TellingTest[] {
  const [a, b] = survivors;
  if (!a?.fit || !b?.fit) return [];
  const { fit } = a;
  const found = candidatesFor(a.rival.network, trials, fit).flatMap((candidate): TellingTest[] => {
    const scatter = scatterOf(fit.readings[candidate.like]?.residual ?? []);
    const [one, other] = [a, b].map((r) => curvesOf(r, trials, candidate, draws.get(r.rival)?.settings ?? []));
    if (!one || !other || !(scatter > 0)) return [];
    let [sum, count] = [0, 0];
    one.middle.forEach((curve, k) => {
      for (let i = 0; i < curve.length; i++) {
        const variance = scatter ** 2 + one.variance[k][i] + other.variance[k][i];
        sum += (curve[i] - other.middle[k][i]) ** 2 / variance;
        count++;
      }
    });
    const apart = Math.sqrt(sum / count);
    return Number.isFinite(apart) ? [{ rivals: [a.rival, b.rival], says: candidate.says, apart }] : [];
  });
  return found.sort((x, y) => y.apart - x.apart);
}

interface Curves {
  readonly middle: readonly Float64Array[];
  readonly variance: readonly Float64Array[];
}

/** What a rival would show on a test, and how far that is open; undefined where it lacks a place of the test. */
function curvesOf(
  { rival, fit }: Ranked,
  trials: readonly Trial[],
  { trial, times }: Candidate,
  draws: readonly Settings[],
): Curves | undefined {
  const { model, whole } = modelOf(rival.network, trials);
  const places = new Set([
    ...rival.network.compartments.map((c) => c.name),
    ...rival.network.outlets.map((o) => o.name),
    ...rival.network.feeds.map((f) => f.name),
  ]);
  if (trial.readings.some((r) => r.places.some((p) => !places.has(p.name)))) return undefined;
  const own = trialOn(whole, trial);
  const wanted = times.map((time) => ({ time }));
  const middle = fit && model.respond(own, fit.values, wanted);
  if (!middle) return undefined;
  const drawn = draws.slice(0, fewDraws).flatMap((settings) => {
    const curves = model.respond(own, settings, wanted);
    return curves ? [curves] : [];
  });
  const variance = middle.map((curve, k) =>
    Float64Array.from(curve, (c, i) =>
      drawn.length < 2 ? 0 : drawn.reduce((s, d) => s + (d[k][i] - c) ** 2, 0) / drawn.length,
    ),
  );
  return { middle, variance };
}

const scatterOf = (residual: ArrayLike<number>): number =>
  Math.sqrt(Array.from(residual).reduce((s, r) => s + r * r, 0) / Math.max(1, residual.length));
