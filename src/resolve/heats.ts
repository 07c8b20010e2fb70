import { product } from "../expressions/build.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { child, type Tree } from "../read/tree.js";
import { nameDimension } from "../units/describe.js";
import { type Dimension, dimensions, over, sameDimension, times } from "../units/dimension.js";
import type { WrittenReaction } from "./reaction.js";
import { aboveZero } from "./sign.js";
import { emptyScope, resolveValue } from "./value.js";

/** Heats of reaction must not depend on the temperature. */
export function heatsHold(written: readonly WrittenReaction[], warm: readonly string[], report: Report): boolean {
  const following = written.filter(({ heat }) => heat?.uses.some((name) => name === "T" || warm.includes(name)));
  for (const { heat, text, at } of following) {
    report("heat-follows-temperature", heat?.at ?? at, { what: `the heat of '${text}'` });
  }
  return following.length === 0;
}

/** Of the ways to count the species those in which heat of reaction times rate is power per volume; none once reported. */
export function withHeats(
  ways: readonly (readonly Dimension[])[],
  written: readonly WrittenReaction[],
  report: Report,
): (readonly Dimension[])[] {
  let left = [...ways];
  for (const { heat, makes, text } of written) {
    if (!heat) continue;
    const fitting = left.filter((way) =>
      sameDimension(times(heat.dimension, way[makes[0].species]), dimensions.pressure),
    );
    if (fitting.length === 0) {
      const wanted = nameDimension(over(dimensions.pressure, left[0][makes[0].species]));
      report("heat-basis", heat.at, { text, got: nameDimension(heat.dimension), wanted });
      return [];
    }
    left = fitting;
  }
  return left;
}

/** Heat capacity of the liquid, J/(m3 K). */
export function resolveMedium(node: Tree | undefined, report: Report): Value | undefined | "faulty" {
  const written = child(node, "heat-capacity");
  if (!written) return undefined;
  const { "heat capacity per volume": perVolume, "heat capacity per mass": perMass } = dimensions;
  const capacity = resolveValue(written, [perVolume, perMass], emptyScope, report);
  const densityNode = child(node, "density");
  const density = densityNode && resolveValue(densityNode, dimensions["mass concentration"], emptyScope, report);
  if (!capacity || (densityNode && !density)) return "faulty";
  if (!aboveZero("the heat capacity", capacity, false, report)) return "faulty";
  if (!aboveZero("the density", density, false, report)) return "faulty";
  const weighed = sameDimension(capacity.dimension, perMass);
  if (weighed !== (density !== undefined)) {
    report("heat-capacity-basis", (density ?? capacity).at, { perMass: weighed });
    return "faulty";
  }
  return density ? productOf(capacity, density, perVolume) : capacity;
}

/** The product of two numbers, their spreads added as relative ones. */
function productOf(a: Value, b: Value, dimension: Dimension): Value {
  const { sd: ofA } = a;
  const { sd: ofB } = b;
  const spread = (env: ArrayLike<number>): number =>
    Math.hypot((ofA?.(env) ?? 0) * b.of(env), (ofB?.(env) ?? 0) * a.of(env));
  return {
    at: a.at,
    dimension,
    unit: undefined,
    expression: product(a.expression, b.expression),
    uses: [],
    of: (env) => a.of(env) * b.of(env),
    sd: ofA || ofB ? spread : undefined,
  };
}
