import { dimensions } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";

/** The unit of heat flows. */
export const kilowatt: Unit = { name: "kW", factor: 1000, offset: 0, dimension: dimensions.power };
