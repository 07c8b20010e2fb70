import { kindValues } from "../compile/evaluate.js";
import type { Plant } from "../compile/plant.js";
import type { SteadyState } from "../reaction/steady.js";
import { meanAges, meanLives } from "../simulate/ages.js";
import { formatNumber } from "../units/format.js";
import { inUnit, one, type Unit } from "../units/unit.js";
import { amount, typeset } from "./scale.js";
import type { FlowSheet, SheetBody } from "./sheet.js";
import { type Cells, cellsOf, tilesOf } from "./tiles.js";

/** A quantity that a drawing can show as the tone of its bodies: one number per body, SI. */
export interface Shown {
  readonly quantity: string;
  readonly values: ReadonlyMap<string, number>;
  readonly unit: Unit;
  /** Of bodies of several cells, the same cell by cell. */
  readonly cells?: ReadonlyMap<string, Cells>;
}

/** What needs no reaction. */
export const quantitiesOfFlow = ["mean age", "life expectancy", "space time"] as const;

/** A reaction's quantities, of a species: "concentration of A", "production of A". */
export const quantitiesOfSpecies = ["concentration of", "production of"] as const;

/** Of the liquid that leaves a body: how old it is, how long it has yet to stay; of the body: volume over through-flow. */
export function shownOfFlow(plant: Plant, quantity: (typeof quantitiesOfFlow)[number]): Shown {
  const { units } = plant.network;
  if (quantity === "space time") {
    const times = plant.network.compartments.map((c): [string, number] => {
      const through = plant.streams
        .filter((s) => s.to === c.name || (s.role === "exchange" && s.from === c.name))
        .reduce((sum, s) => sum + s.flow, 0);
      return [c.name, volumeOf(plant, c.name) / through];
    });
    return { quantity, values: new Map(times.filter(([, t]) => Number.isFinite(t))), unit: units.time };
  }
  const nodes = quantity === "mean age" ? meanAges(plant) : meanLives(plant);
  const at = quantity === "mean age" ? plant.exit : plant.entry;
  return {
    quantity,
    values: byBody(plant, (name) => nodes[at.get(name) ?? -1] ?? Number.NaN),
    unit: units.time,
    cells: cellsOf(plant, (i) => nodes[i]),
  };
}

/**
 * Of a species in a settled plant: the concentration that leaves each body, or what a unit of its volume makes per time
 * (negative where it is consumed), by the balance of the body's streams.
 */
export function shownOfSpecies(
  plant: Plant,
  steady: SteadyState,
  quantity: (typeof quantitiesOfSpecies)[number],
  species: number,
  unit: Unit,
): Shown {
  const n = steady.species.length;
  const leaving = (place: string): number => {
    const node = plant.exit.get(place);
    return node === undefined ? Number.NaN : steady.concentrations[node * n + species];
  };
  const name = `${quantity} ${steady.species[species]}`;
  if (quantity === "concentration of") {
    const cells = cellsOf(plant, (i) => steady.concentrations[i * n + species]);
    return { quantity: name, values: byBody(plant, leaving), unit, cells };
  }
  const made = (body: string): number => {
    let sum = 0;
    for (const s of plant.streams) {
      if (s.from === s.to || s.flow === 0) continue;
      const toward = s.role === "exchange" ? leaving(s.enters) : 0;
      if (s.from === body) sum += s.flow * (leaving(s.leaves) - toward);
      if (s.to === body) sum -= s.flow * (leaving(s.leaves) - toward);
    }
    return sum / volumeOf(plant, body);
  };
  const time = plant.network.units.time;
  const rate: Unit = { ...unit, name: perTime(unit.name, time.name), factor: unit.factor / time.factor, offset: 0 };
  const values = byBody(plant, made);
  // Where all bodies consume it, how much is what the reader asks.
  if ([...values.values()].some((v) => v > 0)) return { quantity: name, values, unit: rate };
  const consumed = new Map([...values].map(([body, v]) => [body, -v]));
  return { quantity: `consumption of ${steady.species[species]}`, values: consumed, unit: rate };
}

/** The temperature that leaves each body, where heat is balanced. */
export function shownTemperature(plant: Plant, temperatures: Float64Array, unit: Unit): Shown {
  const leaving = (place: string): number => temperatures[plant.exit.get(place) ?? -1] ?? Number.NaN;
  return {
    quantity: "temperature",
    values: byBody(plant, leaving),
    unit,
    cells: cellsOf(plant, (i) => temperatures[i]),
  };
}

/** The sheet with the quantity as tones and behind the volumes; bodies without a number keep their tint. */
export function withTones(sheet: FlowSheet, { quantity, values, unit, cells }: Shown): FlowSheet {
  const shown = sheet.bodies.flatMap((b) =>
    b.role === "body" && values.has(b.name) ? [values.get(b.name) ?? 0, ...(cells?.get(b.name)?.value ?? [])] : [],
  );
  if (shown.length === 0) return sheet;
  const low = least(shown);
  const high = -least(shown.map((v) => -v));
  const words = (v: number): string => wordsOf(v, unit);
  const even = words(low) === words(high);
  const toneOf = (v: number): number => (v - low) / (high - low);
  return {
    ...sheet,
    tones: { quantity, low: words(low), high: words(high) },
    bodies: sheet.bodies.map((b) => {
      const value = b.role === "body" ? values.get(b.name) : undefined;
      if (value === undefined) return b;
      const note = b.note ? `${b.note}, ${words(value)}` : words(value);
      if (even) return { ...b, note };
      const own = cells?.get(b.name);
      return { ...b, note, tone: toneOf(value), ...(own ? tiled(own, toneOf, words) : {}) };
    }),
  };
}

function tiled(
  cells: Cells,
  toneOf: (value: number) => number,
  words: (value: number) => string,
): Pick<SheetBody, "tiles" | "tilesSay"> {
  const tiles = tilesOf(cells, toneOf);
  if (cells.inRow) return { tiles };
  const range = `${words(least(cells.value))} to ${words(-least(cells.value.map((v) => -v)))}`;
  return { tiles, tilesSay: `${cells.value.length} cells of ${range}, the youngest left` };
}

/** Of any number of values: as many as there are cells would not do as arguments. */
const least = (values: readonly number[]): number => values.reduce((a, b) => Math.min(a, b), Number.POSITIVE_INFINITY);

function wordsOf(value: number, unit: Unit): string {
  if (unit.offset === 0) return amount(value, unit);
  const number = formatNumber(inUnit(value, unit), 3);
  return unit === one || unit.name === "" ? number : typeset(`${number} ${unit.name}`);
}

/** "mol/L" in a minute is "mol/(L min)". */
function perTime(unit: string, time: string): string {
  const cut = unit.indexOf("/");
  const below = unit.slice(cut + 1).replace(/^\((.*)\)$/, "$1");
  return cut < 0 ? `${unit}/${time}` : `${unit.slice(0, cut)}/(${below} ${time})`;
}

function byBody(plant: Plant, of: (name: string) => number): ReadonlyMap<string, number> {
  const all = plant.network.compartments.map((c): [string, number] => [c.name, of(c.name)]);
  return new Map(all.filter(([name, v]) => Number.isFinite(v) && volumeOf(plant, name) > 0));
}

function volumeOf(plant: Plant, name: string): number {
  const c = plant.network.compartments.find((x) => x.name === name);
  return c ? c.kind.volume(kindValues(c, plant.env)) : 0;
}
