import type { Settings } from "../compile/plant.js";
import { type Operation, type Row, valuesAt } from "./operate.js";
import { rowsFor } from "./sources.js";

/** The figures of a duty over the draws. */
export interface Sample {
  readonly operation: Operation;
  readonly rows: readonly Row[];
  /** `[draw][figure]`, SI; undefined where a draw makes no vessel or does not settle. */
  readonly values: readonly (readonly number[] | undefined)[];
}

export function sampleOf(operation: Operation, settings: readonly Settings[], seed: number): Sample {
  const rows = rowsFor(operation, settings, seed);
  return { operation, rows, values: sampledFigures(operation, rows) };
}

/** Every figure of a duty for every row of draws. */
export const sampledFigures = (operation: Operation, rows: readonly Row[]): (number[] | undefined)[] =>
  rows.map((row) => valuesAt(operation, row));
