import type { Plant } from "../compile/plant.js";
import type { Conditions } from "./conditions.js";
import { passTube } from "./tube.js";

/** Do segregation and maximum mixedness bound what a vessel with this curve can do? */
export interface Premises {
  readonly bound: "yes" | "no" | "not checked";
  /** How the rate bends as conversion grows; tells which bound converts more. */
  readonly rate: "linear" | "convex" | "concave" | "mixed" | "not checked";
  /** In one plain sentence. */
  readonly says: string;
}

/** Where no bound could be computed. */
export const unknownPremises: Premises = {
  bound: "not checked",
  rate: "not checked",
  says: "The bounds were not computed: a rate law asks for its reactant even when that has run out (zero order), or is too steep.",
};

/** Where the plant is too large for its curve. */
export const noCurve: Premises = {
  bound: "not checked",
  rate: "not checked",
  says: "The bounds were not computed: the network has more cells than their exit-age curve is worked out for.",
};

/** Where heat is balanced. */
export const warmPremises: Premises = {
  bound: "no",
  rate: "not checked",
  says: "The bounds were not computed: with heat of reaction a rate may rise as reactants are used up, so what the curve alone allows does not bound the vessel.",
};

/** Where bodies have kinetics of their own. */
export const unlikeBodies: Premises = {
  bound: "no",
  rate: "not checked",
  says: "The bounds were not computed: constants differ from place to place (`local:`), so what the curve alone allows does not bound the vessel.",
};

/** Where nothing happens to what is fed, though the laws are not of first order. */
export const nothingReacts: Premises = {
  bound: "no",
  rate: "not checked",
  says: "The bounds were not computed: what is fed does not react by itself, since the laws need something that is not fed (cells that grow, a product that speeds its own making), and what comes back or is inside from the start decides.",
};

const samples = 200;
/** Conversion in a batch of the whole range below which nothing has happened but rounding. */
const nothing = 1e-9;

/**
 * Looks at what the bounds rest on: one composition fed, and a rate that bends one way only over the range of conversion.
 * @param fed mean feed, scaled
 * @param longest s, the time of the range looked at
 * @see R. Chauhan, J.P. Bell, R.J. Adler, Chem. Eng. Sci. 27 (1972) 585-591 (from memory)
 */
export function premisesOf(plant: Plant, conditions: Conditions, fed: Float64Array, longest: number): Premises {
  if (!oneComposition(plant, conditions)) {
    return {
      bound: "no",
      rate: "not checked",
      says: "The feeds differ in composition, so what the curve alone allows does not bound the vessel: where the feeds meet decides.",
    };
  }
  const rate = bending(conditions, fed, longest);
  if (rate === "nothing reacts") return nothingReacts;
  const says = {
    linear: "All rates are of first order, so the curve alone fixes the result and both bounds agree.",
    convex: "The rate falls ever more slowly as conversion grows (order above one): segregation converts the most.",
    concave: "The rate falls ever faster as conversion grows (order below one): maximum mixedness converts the most.",
    mixed:
      "The rate bends both ways over the range of conversion, so the vessel may do better or worse than both bounds.",
    "not checked":
      "With several reactions it was not checked that these two cases bound the result: read them as two extremes of mixing.",
  }[rate];
  return { bound: rate === "mixed" ? "no" : rate === "not checked" ? "not checked" : "yes", rate, says };
}

function oneComposition(plant: Plant, { feeds, scale }: Conditions): boolean {
  const flowing = feeds.filter((_, k) => plant.feeds[k].flow > 0);
  return flowing.every((feed) => feed.every((c, i) => Math.abs(c - flowing[0][i]) <= 1e-9 * scale[i]));
}

/** Follows a batch: its rate over its extent, by second differences. */
function bending(
  { reactions: { tube } }: Conditions,
  fed: Float64Array,
  longest: number,
): Premises["rate"] | "nothing reacts" {
  const n = tube.size;
  const made = new Float64Array(n);
  const last = fed.slice();
  if (!passTube(tube, longest, last)) return "not checked";
  const moved = last.map((y, i) => y - fed[i]);
  const chief = moved.reduce((best, m, i) => (Math.abs(m) > Math.abs(moved[best]) ? i : best), 0);
  if (moved.length === 0) return "linear";
  // Along a path that leads nowhere every law looks linear: it is asked away from it.
  if (Math.abs(moved[chief]) <= nothing) return isLinear(tube, elsewhere(fed)) ? "linear" : "nothing reacts";
  // One reaction moves the composition along a line; otherwise the batch strays from it.
  const path = Array.from({ length: samples + 1 }, (_, k) => fed.map((y, i) => y + (k / samples) * moved[i]));
  const rates = path.map((y) => {
    tube.production(y, 0, made, 0);
    const along = made[chief] / moved[chief];
    const strays = made.some((m, i) => Math.abs(m - along * moved[i]) > 1e-9 * Math.abs(along * moved[chief]));
    return strays ? Number.NaN : along;
  });
  if (isLinear(tube, path)) return "linear";
  if (rates.some(Number.isNaN)) return "not checked";
  const rounding = 1e-10 * Math.max(...rates.map(Math.abs));
  let [up, down] = [false, false];
  for (let k = 1; k < samples; k++) {
    const second = rates[k + 1] - 2 * rates[k] + rates[k - 1];
    if (second > rounding) up = true;
    if (second < -rounding) down = true;
  }
  return up && down ? "mixed" : up ? "convex" : down ? "concave" : "linear";
}

/** Mixtures of everything, unlike what is fed. */
const elsewhere = (fed: Float64Array): Float64Array[] =>
  Array.from({ length: samples + 1 }, (_, k) => fed.map((y, i) => y + ((1 + (k % 7)) * (1 + i)) / (7 + i)));

/** True where the Jacobian is the same all along the path. */
function isLinear({ size: n, jacobian }: Conditions["reactions"]["tube"], path: readonly Float64Array[]): boolean {
  const at = (y: Float64Array): Float64Array => {
    const j = new Float64Array(n * n);
    jacobian(y, 0, j, 0);
    return j;
  };
  const [first, middle] = [at(path[0]), at(path[samples >> 1])];
  const size = Math.max(...first.map(Math.abs));
  return first.every((x, e) => Math.abs(x - middle[e]) <= 1e-12 * size);
}
