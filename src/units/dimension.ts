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
  volume: [3, 0, 0, 0, 0, 0, 0],
  flow: [3, 0, -1, 0, 0, 0, 0],
  "mass concentration": [-3, 1, 0, 0, 0, 0, 0],
  "molar concentration": [-3, 0, 0, 1, 0, 0, 0],
  "number concentration": [-3, 0, 0, 0, 0, 0, 0],
  "mass rate": [0, 1, -1, 0, 0, 0, 0],
  "molar rate": [0, 0, -1, 1, 0, 0, 0],
  frequency: [0, 0, -1, 0, 0, 0, 0],
  "molar energy": [2, 1, -2, -1, 0, 0, 0],
  "molar mass": [0, 1, 0, -1, 0, 0, 0],
  conductivity: [-3, -1, 3, 0, 0, 2, 0],
  signal: [0, 0, 0, 0, 0, 0, 1],
} as const satisfies Record<string, Dimension>;

export type DimensionName = keyof typeof dimensions;
