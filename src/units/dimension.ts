/** Exponents of length, mass, time, amount, temperature, current and "signal" (any detector's own unit). SI base units. */
export type Dimension = readonly [number, number, number, number, number, number, number];

/** Dimensions by the name that a schema or a message calls them. */
export const dimensions = {
  ratio: [0, 0, 0, 0, 0, 0, 0],
  length: [1, 0, 0, 0, 0, 0, 0],
  mass: [0, 1, 0, 0, 0, 0, 0],
  time: [0, 0, 1, 0, 0, 0, 0],
  amount: [0, 0, 0, 1, 0, 0, 0],
  temperature: [0, 0, 0, 0, 1, 0, 0],
  area: [2, 0, 0, 0, 0, 0, 0],
  volume: [3, 0, 0, 0, 0, 0, 0],
  velocity: [1, 0, -1, 0, 0, 0, 0],
  flow: [3, 0, -1, 0, 0, 0, 0],
  "mass concentration": [-3, 1, 0, 0, 0, 0, 0],
  "molar concentration": [-3, 0, 0, 1, 0, 0, 0],
  "number concentration": [-3, 0, 0, 0, 0, 0, 0],
  "mass rate": [0, 1, -1, 0, 0, 0, 0],
  "molar rate": [0, 0, -1, 1, 0, 0, 0],
  "contact time": [-3, 1, 1, 0, 0, 0, 0],
  "reaction rate": [-3, 0, -1, 1, 0, 0, 0],
  frequency: [0, 0, -1, 0, 0, 0, 0],
  pressure: [-1, 1, -2, 0, 0, 0, 0],
  energy: [2, 1, -2, 0, 0, 0, 0],
  power: [2, 1, -3, 0, 0, 0, 0],
  "molar energy": [2, 1, -2, -1, 0, 0, 0],
  "energy per mass": [2, 0, -2, 0, 0, 0, 0],
  "molar mass": [0, 1, 0, -1, 0, 0, 0],
  "molar entropy": [2, 1, -2, -1, -1, 0, 0],
  "heat conductance": [2, 1, -3, 0, -1, 0, 0],
  "heat transfer coefficient": [0, 1, -3, 0, -1, 0, 0],
  "heat capacity per volume": [-1, 1, -2, 0, -1, 0, 0],
  "heat capacity per mass": [2, 0, -2, 0, -1, 0, 0],
  conductivity: [-3, -1, 3, 0, 0, 2, 0],
  signal: [0, 0, 0, 0, 0, 0, 1],
} as const satisfies Record<string, Dimension>;

export type DimensionName = keyof typeof dimensions;

/** Dimension of a product; exponents add. */
export const times = (a: Dimension, b: Dimension): Dimension => combine(a, b, 1);

/** Dimension of a quotient. */
export const over = (a: Dimension, b: Dimension): Dimension => combine(a, b, -1);

/** Dimension of a power; the exponent may be a fraction. */
export const toPower = (a: Dimension, exponent: number): Dimension => combine(dimensions.ratio, a, exponent);

/** True where two dimensions are the same; fractional exponents meet to 1e-9. */
export const sameDimension = (a: Dimension, b: Dimension): boolean => a.every((x, i) => Math.abs(x - b[i]) < 1e-9);

/** True for a pure number. */
export const isRatio = (d: Dimension): boolean => sameDimension(d, dimensions.ratio);

/** A text that is equal for equal dimensions: for maps. */
export const dimensionKey = (d: Dimension): string => d.map(tidy).join(" ");

/** The common name of a dimension, or undefined where it has none. */
export const dimensionName = (d: Dimension): DimensionName | undefined => names.get(dimensionKey(d));

function combine(a: Dimension, b: Dimension, factor: number): Dimension {
  const sum = (i: number): number => tidy(a[i] + factor * b[i]);
  return [sum(0), sum(1), sum(2), sum(3), sum(4), sum(5), sum(6)];
}

/** Exponents such as (1/3) * 3 come out whole, and never as minus zero. */
const tidy = (x: number): number => Math.round(x * 1e9) / 1e9 + 0;

const names: ReadonlyMap<string, DimensionName> = new Map(
  (Object.keys(dimensions) as DimensionName[]).map((name) => [dimensionKey(dimensions[name]), name]),
);
