import type { Dimension } from "../units/dimension.js";

/** A value as the file would write it, for messages. */
export type Say = (si: number, dimension: Dimension) => string;
