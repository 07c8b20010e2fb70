import type { Chemistry } from "../model/chemistry.js";
import type { Duty, DutyFeed, Placed } from "../model/duty.js";
import { catalogue } from "../problems/catalogue.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, type Entry, entriesOf, itemsOf, type MapNode, type Tree, textOf } from "../read/tree.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { dimensions } from "../units/dimension.js";
import { resolveFlows, resolveMixture, temperatureName } from "./course.js";
import { feedTemperaturesUnused, heatFits, resolveHeat } from "./duty-heat.js";
import { resolveLocal } from "./duty-local.js";
import { massEquations, type SettledFeeds, settleFeeds, settleLimit } from "./feed-basis.js";
import { neverStarting } from "./never-starts.js";
import { goesBack } from "./rate-values.js";
import { resolveRegulated } from "./regulated.js";
import { resolveReportLine } from "./report-line.js";
import { aboveZero } from "./sign.js";
import { emptyScope, resolveTemperature, resolveValue } from "./value.js";

/** Whoever can read files hands over the chemistry that a duty names; undefined once its problems are reported. */
export interface DutyFiles {
  chemistry(relativePath: string, at: Span): Chemistry | undefined;
  /** Where logs are. */
  readonly tables: Files;
}

/**
 * Binds an operating point: flows, feeds, constants set otherwise, temperature, the figures that count.
 * Whether its names exist in a network is `checkDuty`'s to say.
 * @param tree a document that has passed the shape check
 * @param faulty is told what could be read of a duty that has an error
 * @returns undefined once an error is reported
 */
export function resolveDuty(
  tree: MapNode,
  path: string,
  files: DutyFiles,
  report: Report,
  faulty?: (duty: Duty) => void,
): Duty | undefined {
  let good = true;
  const tell: Report = (code, at, data, also) => {
    if (catalogue[code].severity === "error") good = false;
    report(code, at, data, also);
  };
  const chemistryNode = child(tree, "chemistry");
  const named = textOf(tree, "chemistry");
  const chemistry = named === undefined || !chemistryNode ? undefined : files.chemistry(named, chemistryNode.at);
  const { flows, flowCourses } = resolveFlows(child(tree, "flows"), files.tables, tell);
  const temperatureNode = child(tree, "temperature");
  const temperature = temperatureNode && resolveTemperature(temperatureNode, emptyScope, tell);
  aboveZero("the temperature", temperature, false, tell);
  if (named !== undefined && !chemistry) return undefined; // its own problems are reported; names cannot be looked up
  const title = child(tree, "duty");
  const at = title?.at ?? tree.at;
  const given = resolveWith(child(tree, "with"), chemistry, tell);
  const local = resolveLocal(child(tree, "local"), chemistry, tell);
  const feeds = resolveFeeds(child(tree, "feeds"), chemistry, files.tables, tell, "feed", true);
  const contents = resolveFeeds(child(tree, "contents"), chemistry, files.tables, tell, "place", true);
  const species = chemistry ? chemistry.species.map((s) => s.name) : fedNames(feeds, contents);
  const asked = itemsOf(child(tree, "report")).flatMap((item) =>
    item.type === "scalar" ? (resolveReportLine(item, species, tell) ?? []) : [],
  );
  const regulated = resolveRegulated(child(tree, "regulated"), tell);
  const heatNode = child(tree, "heat");
  const heat = heatNode && resolveHeat(heatNode, child(tree, "heat-exchange"), tell);
  if (heatNode && temperatureNode) tell("temperature-and-heat", heatNode.at, {});
  else if (heatNode) heatFits(heatNode.at, chemistry, { ...given, local, feeds }, tell);
  else feedTemperaturesUnused(feeds, tell);
  if (chemistry?.needsTemperature && !temperatureNode && !heatNode) {
    tell("temperature-missing", chemistryNode?.at ?? at, { chemistry: chemistry.title });
  }
  // Without feeds nothing else says how warm it is.
  for (const [place, { at: placed, temperature: warm }] of contents) {
    if (heatNode && !warm && feeds.size === 0) tell("contents-temperature-missing", placed, { place });
    if (!heatNode && warm) tell("feed-temperature-unused", warm.at, { feed: place });
  }
  const settled = chemistry && good ? settleFeeds(chemistry, feeds, contents, tell) : pure(feeds, contents);
  if (chemistry && settled) massEquations(chemistry, settled, asked, tell);
  const lines = settled && asked.flatMap((line) => settleLimit(line, chemistry, species, settled, tell) ?? []);
  const { contents: held, ...fed } = settled ?? pure(feeds, contents);
  if (chemistry && good && settled) {
    const mixtures = [...settled.feeds.values(), ...held.values()];
    const constants = new Map([...given.with].map(([name, { value }]) => [name, value]));
    goesBack(chemistry, [given.with, ...[...local.values()].map((l) => l.constants)], tell);
    const everywhere = local.size === 0; // a constant that holds in one place only may be zero elsewhere
    if (everywhere) neverStarting(chemistry, { at, mixtures, constants, temperature: temperature?.of([]) }, tell);
  }
  const heldAt = child(tree, "contents")?.at;
  const duty: Duty = {
    title: textOf(tree, "duty") ?? "",
    at,
    path,
    chemistry,
    flows,
    ...(flowCourses.size > 0 ? { flowCourses } : {}),
    ...given,
    ...(local.size > 0 ? { local } : {}),
    ...fed,
    ...(heldAt ? { contents: { at: heldAt, levels: held } } : {}),
    temperature,
    ...(heat ? { heat } : {}),
    report: lines || asked,
    ...(regulated ? { regulated } : {}),
  };
  if (good && settled && lines) return duty;
  faulty?.(duty);
  return undefined;
}

/** Names that the chemistry has are its constants; all others are left for the network. */
function resolveWith(
  node: Tree | undefined,
  chemistry: Chemistry | undefined,
  report: Report,
): Pick<Duty, "with" | "settings"> {
  const constants = new Map(chemistry?.constants.map((c) => [c.name, c.value.dimension]));
  const own = new Map<string, Placed>();
  const settings = new Map<string, Placed>();
  for (const { key, value } of entriesOf(node)) {
    const resolved = resolveValue(value, constants.get(key.text) ?? "any", emptyScope, report);
    if (resolved) (constants.has(key.text) ? own : settings).set(key.text, { at: key.at, value: resolved });
  }
  return { with: own, settings };
}

/** What feeds bring, or places hold, by species. `where`: how a message speaks of one; `warm`: may it have a temperature? */
export function resolveFeeds(
  node: Tree | undefined,
  chemistry: Chemistry | undefined,
  files: Files,
  report: Report,
  where = "feed",
  warm = false,
): Map<string, DutyFeed> {
  const known = chemistry?.species.map((s) => s.name);
  const isSpecies = ({ key }: Entry): boolean => {
    if (!known || known.includes(key.text)) return true;
    report("unknown-place", key.at, { name: key.text, nearest: nearest(key.text, known), wanted: "species", known });
    return false;
  };
  return new Map(
    entriesOf(node).map(({ key, value }) => {
      const entries = entriesOf(value).filter((e) => (warm && e.key.text === temperatureName) || isSpecies(e));
      return [key.text, resolveMixture(key.at, entries, warm, `${where} '${key.text}'`, files, report)];
    }),
  );
}

type Mixtures = ReadonlyMap<string, DutyFeed>;

const fedNames = (feeds: Mixtures, contents: Mixtures): string[] => [
  ...new Set([...feeds.values(), ...contents.values()].flatMap((f) => [...f.species.keys()])),
];

/** Dimensions where nothing reacts: as fed, or held at the start. */
const pure = (feeds: Mixtures, contents: Mixtures): SettledFeeds => {
  const all = [...feeds.values(), ...contents.values()];
  const concentrations = fedNames(feeds, contents).map((s) => {
    const first = all.find((f) => f.species.has(s));
    return first?.species.get(s)?.value.dimension ?? dimensions["molar concentration"];
  });
  return { feeds, contents, concentrations };
};
