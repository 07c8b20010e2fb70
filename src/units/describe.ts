import { type Dimension, type DimensionName, dimensionName, isRatio } from "./dimension.js";

const words: Readonly<Record<DimensionName, readonly [says: string, example: string]>> = {
  ratio: ["a pure number or share", "15 %"],
  length: ["a length", "2.4 m"],
  mass: ["a mass", "50 g"],
  time: ["a time", "30 min"],
  amount: ["an amount of substance", "2 mol"],
  temperature: ["a temperature", "35 degC"],
  area: ["an area", "3 m2"],
  volume: ["a volume", "150 L"],
  velocity: ["a velocity", "0.3 m/s"],
  flow: ["a flow (volume per time)", "10 L/min"],
  "mass concentration": ["a mass concentration (mass per volume)", "2 g/L"],
  "molar concentration": ["a molar concentration (amount per volume)", "1 mol/L"],
  "number concentration": ["a number concentration (count per volume)", "100 CFU/mL"],
  "mass rate": ["a mass rate (mass per time)", "3 g/min"],
  "molar rate": ["a molar rate (amount per time)", "0.2 mol/min"],
  "reaction rate": ["a reaction rate (concentration per time)", "0.1 mol/L/min"],
  "contact time": ["a concentration times time", "131 mg·min/L"],
  frequency: ["a rate (per time)", "90 1/min"],
  pressure: ["a pressure", "2 bar"],
  energy: ["an energy", "40 kJ"],
  power: ["a power", "5 kW"],
  "molar energy": ["an energy per amount", "45 kJ/mol"],
  "energy per mass": ["an energy per mass", "500 kJ/kg"],
  "molar mass": ["a molar mass", "58.4 g/mol"],
  "molar entropy": ["an energy per amount and temperature", "8.3 J/mol/K"],
  "heat conductance": ["a heat conductance (power per temperature difference)", "40 W/K"],
  "heat transfer coefficient": ["a heat transfer coefficient", "300 W/(m2 K)"],
  "heat capacity per volume": ["a heat capacity per volume", "4.1 kJ/L/K"],
  "heat capacity per mass": ["a heat capacity per mass", "4.18 kJ/kg/K"],
  conductivity: ["an electrical conductivity", "1.2 mS/cm"],
  signal: ["a detector's reading", "1500 counts"],
};

const bases = ["m", "kg", "s", "mol", "K", "A", "counts"] as const;

/** A dimension in words: "a volume", or "a quantity in m^1.5/s" where it has no name. */
export function nameDimension(d: Dimension): string {
  const name = dimensionName(d);
  return name ? words[name][0] : `a quantity in ${siUnit(d)}`;
}

/** A dimension in words with an example: "a flow (volume per time, like 10 L/min)". */
export function describeDimension(d: Dimension): string {
  const text = nameDimension(d);
  const like = `like ${exampleFor(d)}`;
  return text.endsWith(")") ? `${text.slice(0, -1)}, ${like})` : `${text} (${like})`;
}

/** A value of this dimension as one would write it: "10 L/min". */
export function exampleFor(d: Dimension): string {
  const name = dimensionName(d);
  return name ? words[name][1] : `1 ${siUnit(d)}`;
}

/** The SI unit of a dimension, in our own spelling: "kg/m3", "1/s"; a bare number has none. */
export function siUnit(d: Dimension): string {
  if (isRatio(d)) return "";
  const raised = (i: number): string => {
    const power = Math.abs(d[i]);
    return bases[i] + (power === 1 ? "" : Number.isInteger(power) ? String(power) : `^${power}`);
  };
  const order = [6, 1, 3, 5, 4, 0, 2];
  const up = order.filter((i) => d[i] > 0).map(raised);
  const down = order.filter((i) => d[i] < 0).map(raised);
  const top = up.length === 0 ? "1" : up.length > 1 ? `(${up.join(" ")})` : up[0];
  return [top, ...down].join("/");
}
