import type { Chemistry } from "../model/chemistry.js";
import type { Network } from "../model/network.js";
import type { Reacting, Reading, ReadSpecies } from "../model/trial.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, itemsOf, type MapNode, type Tree, textOf } from "../read/tree.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { nameDimension } from "../units/describe.js";
import { type Dimension, dimensions, sameDimension } from "../units/dimension.js";
import { one, type Unit } from "../units/unit.js";
import { concentrationBases } from "./bases.js";
import { resolveFeeds } from "./duty.js";
import { settleFeeds } from "./feed-basis.js";
import { neverStarting } from "./never-starts.js";
import { aboveZero } from "./sign.js";
import type { TrialClock } from "./trial-clock.js";
import { emptyScope, resolveTemperature, resolveValue } from "./value.js";

/** Whoever can read files hands over what a trial names; undefined once its problems are reported. */
export interface TrialFiles {
  chemistry(relativePath: string, at: Span): Chemistry | undefined;
  /** The network at a path that is relative no longer, where it is closed; its problems are reported. */
  flask(path: string, at: Span): Network | undefined;
}

/** Keys of a trial that mean something only where a chemistry is at work, and only where none is. */
const needing = ["temperature", "feeds", "steady"] as const;
const refusing = ["injection", "tracer"] as const;

/**
 * What a trial says of a reaction.
 * @param vessel that it names
 * @returns undefined where it is of a tracer, or once an error is reported
 */
export function resolveReacting(
  tree: MapNode,
  vessel: { readonly path: string; readonly at: Span } | undefined,
  clock: TrialClock,
  files: TrialFiles,
  report: Report,
): Reacting | undefined {
  const node = child(tree, "chemistry");
  const named = textOf(tree, "chemistry");
  if (!node || named === undefined) {
    for (const key of needing) {
      const found = keyAt(tree, key);
      if (found) report("needs-chemistry", found, { key });
    }
    return undefined;
  }
  for (const key of refusing) {
    const found = keyAt(tree, key);
    if (found) report("chemistry-and-tracer", found, { key });
  }
  const chemistry = files.chemistry(named, node.at);
  const temperature = resolveTemperature(child(tree, "temperature"), emptyScope, report);
  aboveZero("the temperature", temperature, false, report);
  if (!chemistry) return undefined;
  if (chemistry.needsTemperature && !child(tree, "temperature"))
    report("temperature-missing", node.at, { chemistry: chemistry.title });
  let good = true;
  const tell: Report = (code, at, data, also) => {
    good = false;
    report(code, at, data, also);
  };
  const feeds = resolveFeeds(child(tree, "feeds"), chemistry, noFiles, tell);
  const contents = resolveFeeds(child(tree, "contents"), chemistry, noFiles, tell, "place");
  const settled = settleFeeds(chemistry, feeds, contents, report);
  if (!settled) return undefined;
  const mixtures = [...settled.feeds.values(), ...settled.contents.values()];
  // What the day set otherwise may start what the file's constants do not.
  const brought = { at: node.at, mixtures, constants: new Map(), temperature: temperature?.of([]) };
  if (good && !child(tree, "with")) neverStarting(chemistry, brought, report);
  const own = vessel && files.flask(vessel.path, vessel.at);
  return {
    chemistry,
    at: node.at,
    temperature,
    feeds: settled.feeds,
    contents: settled.contents,
    begins: clock.format ? clock.first : 0,
    concentrations: settled.concentrations,
    vessel: own,
  };
}

/** What a trial feeds is steady: no log of it is read. */
const noFiles: Files = { read: () => undefined };

const keyAt = (tree: MapNode, key: string): Span | undefined => tree.entries.find((e) => e.key.text === key)?.key.at;

/** A reading with the species that it is of. What is wrong is reported, and the reading then of none. */
export function ofSpecies(reading: Reading, node: MapNode, reacting: Reacting | undefined, report: Report): Reading {
  const written = child(node, "of");
  if (!reacting) return reading;
  if (!written) {
    report("species-missing", reading.where, { at: reading.at, example: reacting.chemistry.species[0]?.name ?? "A" });
    return reading;
  }
  const of = speciesOf(written, reading.unit, reading.scale === "free", reacting, report);
  return of ? { ...reading, of: { ...of, steady: false } } : reading;
}

function speciesOf(
  node: Tree,
  unit: Unit,
  anyUnit: boolean,
  { chemistry, concentrations }: Reacting,
  report: Report,
): Omit<ReadSpecies, "steady"> | undefined {
  const name = node.type === "scalar" ? node.text : "";
  const known = chemistry.species.map((s) => s.name);
  const species = known.indexOf(name);
  if (species < 0) {
    report("unknown-place", node.at, { name, nearest: nearest(name, known), wanted: "species", known });
    return undefined;
  }
  const wanted = concentrations[species];
  const molarMass = chemistry.species[species].molarMass?.of([]);
  const factor = anyUnit ? 1 : conversion(wanted, unit.dimension, molarMass);
  if (factor === undefined)
    report("reading-basis", node.at, {
      species: name,
      unit: unit.name || "a bare number",
      wanted: nameDimension(wanted),
    });
  return factor === undefined ? undefined : { name, species, factor };
}

/** What a concentration counted as `from` is multiplied by to count as `to`. */
function conversion(from: Dimension, to: Dimension, molarMass: number | undefined): number | undefined {
  if (sameDimension(from, to)) return 1;
  const [molar, mass] = [dimensions["molar concentration"], dimensions["mass concentration"]];
  if (molarMass === undefined) return undefined;
  if (sameDimension(from, molar) && sameDimension(to, mass)) return molarMass;
  return sameDimension(from, mass) && sameDimension(to, molar) ? 1 / molarMass : undefined;
}

/** Analyses of the steady state, each a reading of one point that its `±` weighs. */
export function resolveSteady(node: Tree | undefined, reacting: Reacting | undefined, report: Report): Reading[] {
  return itemsOf(node).flatMap((item): Reading[] => {
    const [at, of] = [child(item, "at"), child(item, "of")];
    const value = resolveValue(child(item, "value"), concentrationBases, emptyScope, report);
    if (!value || !reacting || at?.type !== "scalar" || !of) return [];
    if (!aboveZero("a concentration found", value, true, report)) return [];
    const sd = value.sd?.([]) ?? 0;
    if (!(sd > 0)) {
      report("analysis-spread", value.at, { text: value.at.source.text.slice(value.at.from, value.at.to) });
      return [];
    }
    const unit = value.unit ?? one;
    const species = speciesOf(of, unit, false, reacting, report);
    if (!species) return [];
    return [
      {
        at: at.text,
        where: at.at,
        places: [{ name: at.text, where: at.at, share: 1 }],
        series: {
          file: at.at.source.path,
          at: value.at,
          time: Float64Array.of(0),
          value: Float64Array.of(value.of([])),
          row: Int32Array.of(0),
          timeUnit: minute,
          valueUnit: unit,
          missing: 0,
        },
        stages: [],
        doubts: [],
        censored: undefined,
        limits: { below: undefined, above: undefined },
        calibration: undefined,
        baseline: "none",
        scale: "known",
        line: { delay: undefined, lag: undefined },
        noise: { floor: { ...value, of: () => sd, sd: undefined }, relative: undefined },
        leaveOut: [],
        unit,
        of: { ...species, steady: true },
      },
    ];
  });
}

const minute: Unit = { name: "min", factor: 60, offset: 0, dimension: dimensions.time };
