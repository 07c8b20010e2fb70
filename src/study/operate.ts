import { compile } from "../compile/compile.js";
import type { Plant, Settings } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import { type DutySettings, networkSettings } from "../reaction/conditions.js";
import { type Figure, figuresOf } from "../reaction/figures.js";
import { steadyState } from "../reaction/steady.js";

/** A duty in a network: what its reported figures are a function of. */
export interface Operation {
  readonly network: Network;
  readonly duty: Duty;
  /** Values in place of the file's, such as fitted ones; the duty's own `with:` and `flows:` come before them. SI. */
  readonly values: Settings;
}

/** Values in place of all others: of the network (flows included), and of the duty and its chemistry. SI, by name. */
export interface Row {
  readonly vessel: Settings;
  readonly duty: DutySettings;
}

export const noRow: Row = { vessel: {}, duty: {} };

/** The reported figures at one point, or in words why there are none. */
export type Operated =
  | { readonly figures: readonly Figure[]; readonly cannot?: undefined }
  | { readonly figures?: undefined; readonly cannot: string };

/** The network compiled at the flows of the duty, or why it cannot be. */
export function plantOf(
  { network, duty, values }: Operation,
  row: Row = noRow,
): { plant: Plant; cannot?: undefined } | { plant?: undefined; cannot: string } {
  const { plant, problems } = compile(network, { ...values, ...networkSettings(duty), ...row.vessel });
  return plant ? { plant } : { cannot: problems[0]?.message ?? "the vessel does not balance" };
}

/** What the duty reports, values of a row in place of all others. Concentrations and constants do not fall below zero. */
export function operate(operation: Operation, row: Row = noRow): Operated {
  const made = plantOf(operation, row);
  if (made.plant === undefined) return { cannot: made.cannot };
  const { duty } = operation;
  const settings = nonNegative(row.duty);
  const state = steadyState(made.plant, duty.chemistry, duty, settings);
  if (!state.converged) return { cannot: "the steady state did not converge" };
  return { figures: figuresOf(made.plant, duty, state, settings) };
}

/** Values of figures by number; undefined where there are none. */
export const valuesAt = (operation: Operation, row: Row): number[] | undefined =>
  operate(operation, row).figures?.map((f) => f.value);

/** However wide their `±`. */
const nonNegative = (settings: DutySettings): DutySettings =>
  Object.fromEntries(Object.entries(settings).map(([name, value]) => [name, Math.max(0, value)]));
