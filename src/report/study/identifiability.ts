import { columnWidth } from "../../draw/picture.js";
import { type ProfilePanel, plotProfiles } from "../../draw/profiles.js";
import { plotRegions, type RegionAxis, type RegionPair } from "../../draw/regions.js";
import { typeset } from "../../draw/scale.js";
import type { FittedParameter } from "../../fit/result.js";
import type { Ranked } from "../../study/result.js";
import { differenceInUnit, inUnit } from "../../units/unit.js";
import { atDecimals, chance } from "../digits.js";
import type { Figure, Identifiability } from "../input.js";

const mostPairs = 4;
/** From here on a pair is named in words. */
const close = 0.9;

/** What the tests can tell of the best network's parameters, singly and together. */
export function identifiabilityOf(best: Ranked): Identifiability {
  const correlations = pairsOf(best);
  const parameters = best.fit?.parameters ?? [];
  const loose = parameters.filter((p) => p.standardError === undefined || !p.interval95);
  const tied = correlations.filter((c) => Math.abs(c.value) >= close);
  const { optima = [], residualSumOfSquares = 0 } = best.fit ?? {};
  const others = optima.slice(1).filter((o) => o.residualSumOfSquares < 1.05 * residualSumOfSquares);
  const says = [
    loose.length > 0
      ? `The tests do not tell ${listed(loose.map((p) => `'${p.name}'`))}: no interval could be found.`
      : parameters.length > 0
        ? "Each parameter has an interval that the tests alone close."
        : "No parameter was free: nothing had to be told.",
    ...tied.map(
      (c) =>
        `'${c.one}' and '${c.other}' move together (correlation ${atDecimals(c.value, 2)}): a combination of the two is known better than either.`,
    ),
    others.length > 0
      ? `The search also ended at ${others.length} other set${others.length > 1 ? "s" : ""} of values within 5 % of the best sum of squares: the answer may not be the only one.`
      : optima.length > 0 && parameters.length > 0
        ? `${optima[0].starts} descent${optima[0].starts === 1 ? "" : "s"} from different starts ended at these values, none at others that fit nearly as well.`
        : "",
  ].filter((s) => s !== "");
  return { says, correlations, figures: [...profiles(best), ...regions(best, correlations)] };
}

function pairsOf(best: Ranked): Identifiability["correlations"] {
  // As the intervals: with what the files declare by ± and with autocorrelation.
  const { names, rows } = best.fit?.covariance ?? { names: [], rows: [] };
  const correlation = (i: number, j: number): number => rows[i][j] / Math.sqrt(rows[i][i] * rows[j][j]);
  const pairs = names.flatMap((one, i) =>
    names.slice(i + 1).map((other, j) => ({ one, other, value: correlation(i, i + 1 + j) })),
  );
  return pairs.filter((p) => Number.isFinite(p.value)).sort((a, b) => Math.abs(b.value) - Math.abs(a.value));
}

function profiles({ fit, rival }: Ranked): Figure[] {
  const panels = (fit?.profiles ?? []).map((p): ProfilePanel => {
    const shown = (v: number | undefined): number | undefined => (v === undefined ? undefined : inUnit(v, p.unit));
    return {
      words: `${p.name}${p.unit.name === "" ? "" : `, ${typeset(p.unit.name)}`}`,
      value: p.value.map((v) => inUnit(v, p.unit)),
      deviation: p.deviation,
      interval: [shown(p.interval95[0]), shown(p.interval95[1])],
      through: [p.ends[0] === "smooth", p.ends[1] === "smooth"],
    };
  });
  if (panels.length === 0) return [];
  const title = `Profiles of the parameters of '${rival.network.title}'`;
  return [
    {
      name: "profiles",
      ...plotProfiles({ title, profiles: panels }, { untitled: true, width: columnWidth }),
      caption:
        "How the misfit rises as each parameter is held beside its best value and the others follow; where it reaches the line the tests alone rule the value out (95 %). Dashed: what linear theory takes it for; where the two part, believe the profile. The bar on the axis also carries what declared ± bring. A flat stretch is what the tests cannot tell.",
    },
  ];
}

function regions({ fit, rival }: Ranked, correlations: Identifiability["correlations"]): Figure[] {
  if (!fit || !(fit.freedom > 0)) return [];
  const { names, rows } = fit.covariance;
  const axisOf = (name: string): RegionAxis | undefined => {
    const p = fit.parameters.find((x) => x.name === name);
    const variance = rows[names.indexOf(name)]?.[names.indexOf(name)];
    return p?.interval95 && variance > 0 ? axis(p, p.interval95, Math.sqrt(variance)) : undefined;
  };
  const pairs = correlations.slice(0, mostPairs).flatMap(({ one, other, value }): RegionPair[] => {
    const [x, y] = [axisOf(one), axisOf(other)];
    return x && y ? [{ x, y, correlation: value }] : [];
  });
  if (pairs.length === 0) return [];
  const title = `Pairs of parameters of '${rival.network.title}'`;
  const left = correlations.length > pairs.length ? ` The ${pairs.length} pairs that move together most.` : "";
  return [
    {
      name: "regions",
      ...plotRegions({ title, pairs, freedom: fit.freedom }, { untitled: true, width: columnWidth }),
      caption: `Inside each ellipse lies 95 % of what the fit leaves possible for a pair together; the bars on the axes are the ${chance(0.95)} intervals of each alone.${left}`,
    },
  ];
}

const axis = (p: FittedParameter, [low, high]: readonly [number, number], sd: number): RegionAxis => ({
  words: `${p.name}${p.unit.name === "" ? "" : `, ${typeset(p.unit.name)}`}`,
  value: inUnit(p.value, p.unit),
  standardError: differenceInUnit(sd, p.unit),
  interval: [inUnit(low, p.unit), inUnit(high, p.unit)],
});

const listed = (words: readonly string[]): string =>
  words.length < 2 ? words.join("") : `${words.slice(0, -1).join(", ")} and ${words.at(-1)}`;
