import type { Chemistry } from "../model/chemistry.js";
import type { DutyFeed, Reported } from "../model/duty.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { exampleFor, nameDimension } from "../units/describe.js";
import { type Dimension, dimensions, sameDimension } from "../units/dimension.js";

const molar = dimensions["molar concentration"];
const mass = dimensions["mass concentration"];

/** Feeds counted as the rate laws count, and the dimension of each species. */
export interface SettledFeeds {
  readonly feeds: ReadonlyMap<string, DutyFeed>;
  readonly concentrations: readonly Dimension[];
}

/**
 * Picks the way to count the species that fits both the rate laws and what is fed; grams become moles (or the reverse) by
 * the molar mass where the laws ask for it. Undefined once a misfit is reported.
 */
export function settleFeeds(
  chemistry: Chemistry,
  feeds: ReadonlyMap<string, DutyFeed>,
  report: Report,
): SettledFeeds | undefined {
  const fed = [...feeds.values()].flatMap((feed) =>
    [...feed.species].map(([name, { value }]) => ({ i: chemistry.species.findIndex((s) => s.name === name), value })),
  );
  const fitsAll = (way: readonly Dimension[], convert: boolean): boolean =>
    fed.every(
      ({ i, value }) => sameDimension(value.dimension, way[i]) || (convert && converts(chemistry, i, value, way[i])),
    );
  const way = chemistry.bases.find((w) => fitsAll(w, false)) ?? chemistry.bases.find((w) => fitsAll(w, true));
  if (!way) {
    const [wanted] = chemistry.bases;
    const first =
      fed.find(({ i, value }) => !chemistry.bases.some((w) => sameDimension(w[i], value.dimension))) ??
      fed.find(({ i, value }) => !sameDimension(wanted[i], value.dimension));
    if (first) {
      report("feed-basis", first.value.at, {
        species: chemistry.species[first.i].name,
        got: nameDimension(first.value.dimension),
        wanted: nameDimension(wanted[first.i]),
        example: exampleFor(wanted[first.i]),
      });
    }
    return undefined;
  }
  const settled = [...feeds].map(([name, feed]): [string, DutyFeed] => {
    const species = [...feed.species].map(([s, { at, value }]) => {
      const i = chemistry.species.findIndex((x) => x.name === s);
      return [s, { at, value: converted(value, chemistry.species[i].molarMass, way[i]) }] as const;
    });
    return [name, { ...feed, species: new Map(species) }];
  });
  return { feeds: new Map(settled), concentrations: way };
}

const converts = (chemistry: Chemistry, i: number, { dimension }: Value, wanted: Dimension): boolean =>
  chemistry.species[i].molarMass !== undefined &&
  ((sameDimension(dimension, mass) && sameDimension(wanted, molar)) ||
    (sameDimension(dimension, molar) && sameDimension(wanted, mass)));

/** mol/m3 = (kg/m3) / (kg/mol), and back. */
function converted(value: Value, molarMass: Value | undefined, wanted: Dimension): Value {
  if (!molarMass || sameDimension(value.dimension, wanted)) return value;
  const factor = sameDimension(wanted, molar) ? 1 / molarMass.of([]) : molarMass.of([]);
  const { sd } = value;
  return {
    ...value,
    dimension: wanted,
    unit: undefined,
    of: (env) => value.of(env) * factor,
    sd: sd && ((env) => sd(env) * factor),
  };
}

/**
 * Warns where an equation, which counts molecules, meets species that are fed as masses, and a figure depends on it: on a
 * product, or on two reactants used up together.
 */
export function massEquations(
  chemistry: Chemistry,
  { feeds, concentrations }: SettledFeeds,
  asked: readonly Reported[],
  report: Report,
): void {
  const place = [...feeds.values()].flatMap((f) => [...f.species.values()])[0]?.value.at;
  if (!place) return;
  for (const { counts, makes, text } of chemistry.reactions) {
    if (counts !== "molecules" || makes.some((m) => !sameDimension(concentrations[m.species], mass))) continue;
    const used = makes.filter((m) => m.number([]) < 0).map((m) => chemistry.species[m.species].name);
    const made = makes.filter((m) => m.number([]) > 0).map((m) => chemistry.species[m.species].name);
    const wanted = asked.some((r) => made.includes(r.of) || (r.versus !== undefined && made.includes(r.versus)));
    if (used.length > 1 || wanted) report("mass-equation", place, { text });
  }
}
