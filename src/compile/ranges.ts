import type { Network } from "../model/network.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { KeyShape, Shape } from "../schema/shape.js";
import { dimensions, isRatio } from "../units/dimension.js";
import { formatNumber } from "../units/format.js";
import { kindValues } from "./evaluate.js";
import type { Say } from "./say.js";

/** Liquid held by every compartment, m3, in file order; none below zero. */
export function volumesOf(network: Network, env: Float64Array, report: Report, say: Say): Float64Array {
  return Float64Array.from(network.compartments, (c) => {
    const volume = c.kind.volume(kindValues(c, env));
    const own = c.values.volume?.of(env) ?? volume; // pockets beside it must not hide what is below zero
    const at = c.values.volume?.at ?? c.at;
    if (!Number.isFinite(own)) {
      report("not-finite", at, { what: `the volume of '${c.name}'`, infinite: !Number.isNaN(own) });
    } else if (own < 0) report("negative-volume", at, { name: c.name, value: say(own, dimensions.volume) });
    return volume;
  });
}

/** Exchanges not below zero; keys of a kind within what its declaration allows: a Péclet number above 0, at least one tank. */
export function valuesInRange(network: Network, env: Float64Array, report: Report, say: Say): void {
  for (const c of network.compartments) {
    for (const { partner, flow } of c.exchanges) {
      const x = finite(`the flow between '${c.name}' and '${partner}'`, flow, env, report);
      const name = `between '${c.name}' and '${partner}'`;
      if (x < 0) report("negative-flow", flow.at, { name, value: say(x, dimensions.flow), exchange: true });
    }
    for (const [key, value] of Object.entries(c.values)) {
      const shape = shapeOf(c.kind.keys, key);
      if (key === "volume" || shape?.is !== "quantity") continue;
      const x = finite(`the ${key} of '${c.name}'`, value, env, report);
      const least = shape.atLeast !== undefined && x < shape.atLeast;
      const limit = least ? shape.atLeast : x <= (shape.above ?? Number.NEGATIVE_INFINITY) ? shape.above : undefined;
      if (limit === undefined) continue;
      const plain = isRatio(value.dimension) && value.unit?.name !== "%"; // a count, no share
      const text = (si: number) => (plain ? formatNumber(si) : say(si, value.dimension));
      report("out-of-range", value.at, { name: c.name, key, value: text(x), limit: text(limit), least });
    }
  }
}

/** The value; NaN, and reported, where it is not finite. */
function finite(what: string, value: Value, env: Float64Array, report: Report): number {
  const x = value.of(env);
  if (Number.isFinite(x)) return x;
  report("not-finite", value.at, { what, infinite: !Number.isNaN(x) });
  return Number.NaN;
}

/** The declaration of a key, or of one inside it: `stagnant.volume`. */
export function shapeOf(keys: Readonly<Record<string, KeyShape>>, path: string): Shape | undefined {
  const [first, ...rest] = path.split(".");
  const shape = keys[first]?.shape;
  return rest.length > 0 && shape?.is === "record" ? shapeOf(shape.keys, rest.join(".")) : shape;
}
