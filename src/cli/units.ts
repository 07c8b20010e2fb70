import { toPower } from "../units/dimension.js";
import { one, type Unit } from "../units/unit.js";

/** 1/min of min: the unit of a density over time. */
export const perUnit = (unit: Unit): Unit => ({
  name: `1/${unit.name}`,
  factor: 1 / unit.factor,
  offset: 0,
  dimension: toPower(unit.dimension, -1),
});

/** min^2 of min: the unit of a variance. */
export const squared = (unit: Unit): Unit => ({
  name: `${unit.name}^2`,
  factor: unit.factor ** 2,
  offset: 0,
  dimension: toPower(unit.dimension, 2),
});

/** A pure number, bare in text and `1` in JSON. */
export const pureNumber = one;

/** Amounts are counted in units of tracer after a pulse; after a step in what is dosed per time: a time. */
export const balanceUnit = (form: "pulse" | "step", time: Unit): Unit => (form === "pulse" ? pureNumber : time);
