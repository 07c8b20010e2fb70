import type { Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty, Reported } from "../model/duty.js";
import { exitTime } from "../simulate/exit-curve.js";
import { untraceable } from "../simulate/trace.js";
import { siUnit } from "../units/describe.js";
import { type Dimension, dimensions, sameDimension } from "../units/dimension.js";
import { parseUnit } from "../units/parse.js";
import { one, type Unit } from "../units/unit.js";
import { constantsOf, type DutySettings } from "./constants.js";
import type { SteadyState } from "./steady.js";

/** A figure that a duty asks for. */
export interface Figure {
  /** As the duty has it. */
  readonly name: string;
  /** SI; Infinity or NaN where `why` says so. Conversion, yield and selectivity are fractions. */
  readonly value: number;
  readonly why: "infinite" | "undefined" | "not-estimable" | undefined;
  /** The unit to print it in. */
  readonly unit: Unit;
}

/** What went in and what came out, by species, in the same measure (amount per second, or mean concentration). */
export interface InAndOut {
  readonly fed: Float64Array;
  readonly out: Float64Array;
}

/**
 * The values of a duty's report lines in a steady state.
 * @param settings what replaced the duty's values in that state
 */
export function figuresOf(plant: Plant, duty: Duty, state: SteadyState, settings: DutySettings = {}): Figure[] {
  return duty.report.map((line) => {
    if (line.what === "tracer-time") return tracerFigure(plant, line);
    if (line.what === "time-beyond") return figure(line, Number.NaN, plant.network.units.time, "not-estimable");
    if (line.what === "temperature") {
      const node = plant.exit.get(line.at ?? "");
      const held = settings.temperature ?? duty.temperature?.of([]);
      const value =
        held ??
        state.outlets.find((o) => o.name === line.at)?.temperature ??
        (node === undefined ? undefined : state.temperatures?.[node]) ??
        Number.NaN;
      return figure(line, value, temperatureUnit(duty));
    }
    return speciesFigure(duty, state.species, line, streamsFor(plant, state, line), settings);
  });
}

/** The unit that a duty gives a temperature in, first its own. */
export function temperatureUnit(duty: Duty): Unit {
  const fed = [...duty.feeds.values()].map((f) => f.temperature);
  const jackets = [...(duty.heat?.jackets.values() ?? [])].map((j) => j.temperature);
  const written = [duty.temperature, ...fed, ...jackets].find((t) => t?.unit !== undefined);
  return written?.unit ?? kelvin;
}

const kelvin: Unit = { name: "K", factor: 1, offset: 0, dimension: dimensions.temperature };

/** By when so many % of a pulse have left. */
export function tracerFigure(plant: Plant, line: Reported): Figure {
  const value = untraceable(plant).length > 0 ? Number.NaN : exitTime(plant, line.at, (line.percent ?? 0) / 100);
  return figure(line, value, plant.network.units.time, "not-estimable");
}

/** One figure of a species from what went in and came out. */
export function speciesFigure(
  duty: Duty,
  species: readonly string[],
  line: Reported,
  { fed, out }: InAndOut,
  settings: DutySettings = {},
): Figure {
  const { chemistry } = duty;
  const i = species.indexOf(line.of);
  const j = line.versus === undefined ? -1 : species.indexOf(line.versus);
  const number = (s: number, sign: 1 | -1, with_: number): number =>
    chemistry ? stoichiometricNumber(chemistry, constantsOf(chemistry, duty, settings), s, sign, with_) : 1;
  const made = (s: number): number => (out[s] - fed[s]) / number(s, 1, -1);
  switch (line.what) {
    case "conversion":
      return figure(line, (fed[i] - out[i]) / fed[i], one);
    case "log-removal":
      return figure(
        line,
        out[i] > 0 ? Math.log10(fed[i] / out[i]) : fed[i] > 0 ? Number.POSITIVE_INFINITY : Number.NaN,
        one,
      );
    case "yield":
      return figure(line, (out[i] - fed[i]) / number(i, 1, j) / (fed[j] / -number(j, -1, i)), one);
    case "selectivity":
      return figure(line, made(i) / made(j), one);
    default:
      return figure(line, out[i], concentrationUnit(duty, species, i));
  }
}

/** What a line looks at: all outlets as amounts, or the mean feed and one place as concentrations. */
function streamsFor(plant: Plant, state: SteadyState, line: Reported): InAndOut {
  if (line.at === undefined) return { fed: state.fed, out: state.left };
  const n = state.species.length;
  const node = plant.exit.get(line.at);
  const start = (node ?? 0) * n;
  const out = node === undefined ? new Float64Array(n).fill(Number.NaN) : state.concentrations.slice(start, start + n);
  return { fed: meanFeed(plant, state.fed), out };
}

/** Mean concentration over all feeds, from amounts per second. */
export function meanFeed(plant: Plant, fed: Float64Array): Float64Array {
  const flow = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  return fed.map((amount) => amount / flow);
}

function figure(line: Reported, value: number, unit: Unit, undefinedMeans: Figure["why"] = "undefined"): Figure {
  // Minus infinity only comes from dividing by a zero feed: nothing to relate to.
  const why = Number.isNaN(value)
    ? undefinedMeans
    : Number.isFinite(value)
      ? undefined
      : value > 0
        ? "infinite"
        : "undefined";
  return { name: line.text, value: why === "undefined" ? Number.NaN : value, why, unit };
}

/**
 * The number by which one unit of reaction makes (sign 1) or uses (-1) a species: that of the first reaction that does so
 * together with the other species, else of the first that does so at all, else 1.
 * @param constants as `constantsOf` gives them
 */
export function stoichiometricNumber(
  chemistry: Chemistry,
  constants: Float64Array,
  species: number,
  sign: 1 | -1,
  other: number,
): number {
  const env = new Float64Array(chemistry.species.length + constants.length);
  env.set(constants, chemistry.species.length);
  let first: number | undefined;
  for (const { makes } of chemistry.reactions) {
    const own = makes.find((m) => m.species === species)?.number(env) ?? 0;
    if (own * sign <= 0) continue;
    if (makes.some((m) => m.species === other)) return own;
    first ??= own;
  }
  return first ?? sign;
}

const usual = ["mol/L", "g/L", "1/mL"];

/** The unit of a species in its feeds, else of another counted alike, else a usual one. */
function concentrationUnit(duty: Duty, species: readonly string[], i: number): Unit {
  const wanted: Dimension = duty.concentrations[i] ?? dimensions["molar concentration"];
  const written = [...duty.feeds.values()].flatMap((feed) => [...feed.species]);
  const own = written.filter(([name]) => name === species[i]);
  for (const [, { value }] of [...own, ...written]) {
    if (value.unit && sameDimension(value.unit.dimension, wanted)) return value.unit;
  }
  for (const text of [...usual, siUnit(wanted)]) {
    const unit = parseUnit(text);
    if ("factor" in unit && sameDimension(unit.dimension, wanted)) return unit;
  }
  return { name: siUnit(wanted), factor: 1, offset: 0, dimension: wanted };
}
