import { type Dimension, dimensions, over, times } from "./dimension.js";

/** One symbol: SI = number * up / down + offset. Two whole numbers, so that products and quotients round once. */
export interface UnitSymbol {
  readonly up: number;
  readonly down: number;
  readonly offset: number;
  readonly dimension: Dimension;
}

const d = dimensions;
const current: Dimension = [0, 0, 0, 0, 0, 1, 0];
const force = over(d.energy, d.length);
const siemens = times(d.conductivity, d.length);

/**
 * Symbols, prefixes that engineers put before them, size and dimension. Exact factors are those of NIST Special
 * Publication 811 (2008), Appendix B, and of the BIPM SI brochure (9th ed., 2019); inexact ones are marked.
 */
export const unitRows: readonly (readonly [
  symbols: string,
  prefixes: string,
  up: number,
  down: number,
  dimension: Dimension,
])[] = [
  ["m", "k d c m u n", 1, 1, d.length],
  ["in", "", 254, 10000, d.length],
  ["ft", "", 3048, 10000, d.length],
  ["L", "M k h d c m u n", 1, 1000, d.volume],
  ["l", "k h d c m u n", 1, 1000, d.volume],
  ["gal", "", 3785411784, 1e12, d.volume],
  ["qt", "", 946352946, 1e12, d.volume],
  ["pt", "", 473176473, 1e12, d.volume],
  ["floz", "", 295735295625, 1e16, d.volume],
  ["galUK impgal", "", 454609, 1e8, d.volume],
  ["bbl", "", 158987294928, 1e12, d.volume],
  ["gpm", "", 3785411784, 60e12, d.flow],
  ["MGD", "", 3785411784, 86400e6, d.flow],
  ["s", "m u n", 1, 1, d.time],
  ["min", "", 60, 1, d.time],
  ["h", "", 3600, 1, d.time],
  ["d", "", 86400, 1, d.time],
  ["wk", "", 604800, 1, d.time],
  ["g", "k m u n", 1, 1000, d.mass],
  ["t", "", 1000, 1, d.mass],
  ["lb", "", 45359237, 1e8, d.mass],
  ["oz", "", 28349523125, 1e12, d.mass],
  ["mol", "k m u n", 1, 1, d.amount],
  ["K", "m", 1, 1, d.temperature],
  ["N", "k m", 1, 1, force],
  ["Pa", "M k h m", 1, 1, d.pressure],
  ["bar", "m", 100000, 1, d.pressure],
  ["atm", "", 101325, 1, d.pressure],
  ["psi", "", 6894.757, 1, d.pressure], // NIST SP 811, 7 digits
  ["mmHg", "", 133.3224, 1, d.pressure], // NIST SP 811, 7 digits
  ["J", "G M k m", 1, 1, d.energy],
  ["cal", "k", 4184, 1000, d.energy], // thermochemical
  ["Wh", "M k", 3600, 1, d.energy],
  ["W", "G M k m u", 1, 1, d.power],
  ["A", "m u", 1, 1, current],
  ["V", "k m u", 1, 1, over(d.power, current)],
  ["S", "m u n", 1, 1, siemens],
  ["Hz", "k", 1, 1, d.frequency],
  ["rpm", "", 1, 60, d.frequency],
  ["Bq", "T G M k m", 1, 1, d.frequency],
  ["Ci", "m u n", 3.7e10, 1, d.frequency],
  ["CFU PFU cells particles", "", 1, 1, d.ratio],
  ["%", "", 1, 100, d.ratio],
  ["ppm", "", 1, 1e6, d.ratio],
  ["ppb", "", 1, 1e9, d.ratio],
  ["counts", "", 1, 1, d.signal],
  ["cps", "", 1, 1, over(d.signal, d.time)],
  ["cpm", "", 1, 60, over(d.signal, d.time)],
  ["AU NTU", "", 1, 1, d.signal],
];

const sizes: Readonly<Record<string, readonly [up: number, down: number]>> = {
  T: [1e12, 1],
  G: [1e9, 1],
  M: [1e6, 1],
  k: [1e3, 1],
  h: [1e2, 1],
  d: [1, 10],
  c: [1, 100],
  m: [1, 1e3],
  u: [1, 1e6],
  n: [1, 1e9],
};

/** Every symbol that may stand in a unit, with its prefixes spelt out. */
export const symbols: ReadonlyMap<string, UnitSymbol> = spellOut();

/** What people write for a unit that we spell otherwise; asked back, never taken silently. Keys in lower case. */
export const otherSpellings: ReadonlyMap<string, string> = new Map(
  Object.entries({
    lpm: "L/min",
    slpm: "L/min",
    "l/m": "L/min",
    lph: "L/h",
    gph: "gal/h",
    gpd: "gal/d",
    cfm: "ft3/min",
    cfs: "ft3/s",
    cmh: "m3/h",
    cms: "m3/s",
    cc: "mL",
    ccm: "mL",
    cbm: "m3",
    cum: "m3",
    cuft: "ft3",
    litre: "L",
    litres: "L",
    liter: "L",
    liters: "L",
    gallon: "gal",
    gallons: "gal",
    usgal: "gal",
    galus: "gal",
    imp: "impgal",
    igal: "impgal",
    galimp: "impgal",
    ukgal: "impgal",
    quart: "qt",
    quarts: "qt",
    pint: "pt",
    pints: "pt",
    fl: "floz",
    ozfl: "floz",
    sec: "s",
    secs: "s",
    second: "s",
    seconds: "s",
    mins: "min",
    minute: "min",
    minutes: "min",
    hr: "h",
    hrs: "h",
    hour: "h",
    hours: "h",
    day: "d",
    days: "d",
    week: "wk",
    weeks: "wk",
    gram: "g",
    grams: "g",
    gm: "g",
    kilo: "kg",
    kilos: "kg",
    ton: "t",
    tonne: "t",
    tonnes: "t",
    lbs: "lb",
    pound: "lb",
    pounds: "lb",
    mole: "mol",
    moles: "mol",
    m: "mol/L",
    mm: "mmol/L",
    molar: "mol/L",
    c: "degC",
    celsius: "degC",
    f: "degF",
    fahrenheit: "degF",
    kelvin: "K",
    pct: "%",
    barg: "bar",
    bara: "bar",
    count: "counts",
    cts: "counts",
    inch: "in",
    inches: "in",
    feet: "ft",
    foot: "ft",
    meter: "m",
    metre: "m",
    btu: "kJ",
    watt: "W",
    watts: "W",
    joule: "J",
    joules: "J",
  }),
);

function spellOut(): Map<string, UnitSymbol> {
  const all = new Map<string, UnitSymbol>();
  // Whole symbols first: "min" is a minute, never a milli-inch.
  for (const [names, , up, down, dimension] of unitRows)
    for (const name of names.split(" ")) all.set(name, { up, down, offset: 0, dimension });
  for (const [names, prefixes, up, down, dimension] of unitRows) {
    for (const name of names.split(" ")) {
      for (const prefix of prefixes.split(" ").filter(Boolean)) {
        const [more, less] = sizes[prefix];
        const sized = { ...lowest(up * more, down * less), offset: 0, dimension };
        for (const spelt of prefix === "u" ? ["u", "µ", "μ"] : [prefix])
          if (!all.has(spelt + name)) all.set(spelt + name, sized);
      }
    }
  }
  const celsius = { up: 1, down: 1, offset: 273.15, dimension: d.temperature };
  const fahrenheit = { up: 5, down: 9, offset: (459.67 * 5) / 9, dimension: d.temperature };
  for (const name of ["degC", "°C", "℃"]) all.set(name, celsius);
  for (const name of ["degF", "°F", "℉"]) all.set(name, fahrenheit);
  return all;
}

/** Takes common powers of ten out of a fraction, so that long products stay exact. */
export function lowest(up: number, down: number): { up: number; down: number } {
  let a = up;
  let b = down;
  while (a >= 10 && b >= 10 && a % 10 === 0 && b % 10 === 0) {
    a /= 10;
    b /= 10;
  }
  return { up: a, down: b };
}
