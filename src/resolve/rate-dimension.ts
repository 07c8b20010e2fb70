import { type Expression, namesIn } from "../expressions/ast.js";
import { dimensionOf } from "../expressions/dimension-of.js";
import { isFault } from "../expressions/fault.js";
import type { Report } from "../problems/report.js";
import { nameDimension, siUnit } from "../units/describe.js";
import { type Dimension, dimensions, over, times } from "../units/dimension.js";
import { concentrationBases, findBases, type OtherNames, type RateLaw, rateDimension } from "./bases.js";
import type { WrittenReaction } from "./reaction.js";
import { spanWithin } from "./span.js";
import { reportFault } from "./value.js";

/** Says why no way to count the species makes every rate concentration per time. */
export function explainRates(
  species: readonly string[],
  reactions: readonly WrittenReaction[],
  others: OtherNames,
  report: Report,
): void {
  const laws = reactions.map(({ rate, makes }): RateLaw => ({ rate, changes: makes.map((m) => m.species) }));
  const alone = laws.map((law) => findBases(species, [law], others));
  const settled = alone.findIndex((ways) => ways.length > 0);
  let told = false;
  alone.forEach((ways, r) => {
    if (ways.length > 0) return;
    told = true;
    const shown = settled >= 0 ? alone[settled][0] : species.map(() => likelyBasis(reactions[r].rate, others));
    explainOne(species, reactions[r], laws[r], shown, others, report);
  });
  if (told) return;
  for (let r = 1; r < reactions.length; r++) {
    if (findBases(species, laws.slice(0, r + 1), others).length > 0) continue;
    const { text, rateNode } = reactions[r];
    const basis = (k: number): string => nameDimension(alone[k][0][laws[k].changes[0]]);
    const clash = alone.findIndex((_, k) => k < r && findBases(species, [laws[k], laws[r]], others).length === 0);
    const first = Math.max(clash, 0);
    report(
      "rates-disagree",
      rateNode.at,
      { first: reactions[first].text, second: text, firstBasis: basis(first), secondBasis: basis(r) },
      { at: reactions[first].rateNode.at, says: "the other law" },
    );
    return;
  }
}

function explainOne(
  species: readonly string[],
  { text, rate, rateNode, rateText }: WrittenReaction,
  law: RateLaw,
  way: readonly Dimension[],
  others: OtherNames,
  report: Report,
): void {
  const got = rateDimension(species, law, way, others);
  if (!got) {
    const scope = { dimension: (name: string) => way[species.indexOf(name)] ?? others(name) };
    const fault = dimensionOf(rate, scope);
    if (fault && isFault(fault)) reportFault(rateNode, fault, report);
    return;
  }
  const wanted = over(way[law.changes[0]], dimensions.time);
  const constants = namesIn(rate).filter((name) => !species.includes(name) && name !== "T");
  const [constant] = constants;
  const own = constants.length === 1 ? others(constant) : undefined;
  const fix = own
    ? `give ${constant} a unit such as ${engineersUnit(times(own, over(wanted, got)))}`
    : "make the law concentration per time by the units of its constants";
  report("rate-dimension", spanWithin(rateNode, 0, rateNode.text.length), {
    text,
    rate: rateText,
    got: nameDimension(got),
    fix,
  });
}

/** Mass where a constant of the law is per mass and none per amount, else molar. */
function likelyBasis(rate: Expression, others: OtherNames): Dimension {
  const kinds = namesIn(rate)
    .map(others)
    .filter((d) => d !== undefined);
  const [molar, mass] = concentrationBases;
  return kinds.some((d) => d[1] !== 0) && kinds.every((d) => d[3] === 0) ? mass : molar;
}

/** A unit in L, g, mol and min where length comes in whole volumes: "L/mol/min". */
function engineersUnit(d: Dimension): string {
  const [length, mass, time, amount, ...rest] = d;
  if (rest.some((x) => x !== 0)) return siUnit(d);
  const parts: [string, number][] = [
    ["L", length / 3],
    ["g", mass],
    ["mol", amount],
    ["min", time],
  ];
  const raised = (symbol: string, x: number): string =>
    x === 1 ? symbol : Number.isInteger(x) ? `${symbol}${x}` : `${symbol}^${x}`;
  const up = parts.filter(([, x]) => x > 0).map(([s, x]) => raised(s, x));
  const down = parts.filter(([, x]) => x < 0).map(([s, x]) => raised(s, -x));
  const top = up.length === 0 ? "1" : up.length > 1 ? `(${up.join(" ")})` : up[0];
  return [top, ...down].join("/");
}
