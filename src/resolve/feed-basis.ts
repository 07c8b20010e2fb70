import type { Chemistry } from "../model/chemistry.js";
import type { DutyFeed, FeedCourse, Reported } from "../model/duty.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { exampleFor, nameDimension } from "../units/describe.js";
import { type Dimension, dimensions, sameDimension } from "../units/dimension.js";

const molar = dimensions["molar concentration"];
const mass = dimensions["mass concentration"];

/** Feeds counted as the rate laws count, and the dimension of each species. */
export interface SettledFeeds {
  readonly feeds: ReadonlyMap<string, DutyFeed>;
  readonly contents: ReadonlyMap<string, DutyFeed>;
  readonly concentrations: readonly Dimension[];
}

/**
 * Picks the way to count the species that fits both the rate laws and what is fed; grams become moles (or the reverse) by
 * the molar mass where the laws ask for it. Undefined once a misfit is reported.
 */
export function settleFeeds(
  chemistry: Chemistry,
  feeds: ReadonlyMap<string, DutyFeed>,
  contents: ReadonlyMap<string, DutyFeed>,
  report: Report,
): SettledFeeds | undefined {
  const indexOf = (name: string): number => chemistry.species.findIndex((s) => s.name === name);
  const fed = [...feeds.values(), ...contents.values()].flatMap((feed) =>
    [...feed.species].map(([name, { value }]) => ({ i: indexOf(name), value })),
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
  const counted = (feed: DutyFeed): DutyFeed => {
    const species = [...feed.species].map(([s, { at, value }]) => {
      const i = indexOf(s);
      return [s, { at, value: converted(value, chemistry.species[i].molarMass, way[i]) }] as const;
    });
    const courses = [...(feed.courses ?? [])].map(([s, course]): [string, FeedCourse] => {
      const [i, before] = [indexOf(s), feed.species.get(s)?.value];
      if (i < 0) return [s, course]; // the temperature
      if (course.is === "upset")
        return [s, { ...course, to: converted(course.to, chemistry.species[i].molarMass, way[i]) }];
      const factor = before ? factorTo(before, chemistry.species[i].molarMass, way[i]) : 1;
      return [s, { ...course, values: course.values.map((c) => c * factor) }];
    });
    return { ...feed, species: new Map(species), ...(feed.courses ? { courses: new Map(courses) } : {}) };
  };
  const all = (mixtures: ReadonlyMap<string, DutyFeed>): ReadonlyMap<string, DutyFeed> =>
    new Map([...mixtures].map(([name, feed]) => [name, counted(feed)]));
  return { feeds: all(feeds), contents: all(contents), concentrations: way };
}

/** The limit of a report line, counted as its species is. Undefined once a misfit is reported. */
export function settleLimit(
  line: Reported,
  chemistry: Chemistry | undefined,
  species: readonly string[],
  { concentrations }: Pick<SettledFeeds, "concentrations">,
  report: Report,
): Reported | undefined {
  // One of the temperature is no concentration.
  if (!line.limit || line.of === "") return line;
  const i = species.indexOf(line.of);
  const wanted = concentrations[i];
  const { value } = line.limit;
  if (sameDimension(value.dimension, wanted)) return line;
  if (chemistry && converts(chemistry, i, value, wanted)) {
    return { ...line, limit: { ...line.limit, value: converted(value, chemistry.species[i].molarMass, wanted) } };
  }
  report("limit-unit", value.at, {
    species: line.of,
    got: nameDimension(value.dimension),
    wanted: nameDimension(wanted),
    example: exampleFor(wanted),
  });
  return undefined;
}

const converts = (chemistry: Chemistry, i: number, { dimension }: Value, wanted: Dimension): boolean =>
  chemistry.species[i].molarMass !== undefined &&
  ((sameDimension(dimension, mass) && sameDimension(wanted, molar)) ||
    (sameDimension(dimension, molar) && sameDimension(wanted, mass)));

/** mol/m3 = (kg/m3) / (kg/mol), and back. */
function factorTo({ dimension }: Value, molarMass: Value | undefined, wanted: Dimension): number {
  if (!molarMass || sameDimension(dimension, wanted)) return 1;
  return sameDimension(wanted, molar) ? 1 / molarMass.of([]) : molarMass.of([]);
}

/** A value counted so. */
function converted(value: Value, molarMass: Value | undefined, wanted: Dimension): Value {
  const factor = factorTo(value, molarMass, wanted);
  if (factor === 1) return value;
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
