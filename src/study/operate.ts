import { compile } from "../compile/compile.js";
import { evaluateNames } from "../compile/evaluate.js";
import type { Plant, Settings } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import { constantsOf, type DutySettings, networkSettings } from "../reaction/conditions.js";
import { type Figure, figuresOf } from "../reaction/figures.js";
import { steadyState } from "../reaction/steady.js";
import { backwardsWith } from "../resolve/rate-values.js";
import { withTimes } from "../transient/in-time.js";
import { sameSide } from "./draws.js";

/** A duty in a network: what its reported figures are a function of. */
export interface Operation {
  readonly network: Network;
  readonly duty: Duty;
  /** Values in place of the file's, such as fitted ones; the duty's own `with:` and `flows:` come before them. SI. */
  readonly values: Settings;
  /** Rate constants that were fitted along: under what name the fit has them, and what the chemistry calls them. */
  readonly kinetics: ReadonlyMap<string, string>;
}

/** Values in place of all others: of the network (flows included), and of the duty and its chemistry. SI, by name. */
export interface Row {
  readonly vessel: Settings;
  readonly duty: DutySettings;
  /**
   * What is made of other names and has a `±` of its own, such as a rate constant that follows the temperature: how many
   * standard deviations it lies off what these names make of it. One that is in `vessel` or `duty` as well does not count.
   */
  readonly off: { readonly vessel: Settings; readonly duty: DutySettings };
}

export const noRow: Row = { vessel: {}, duty: {}, off: { vessel: {}, duty: {} } };

/** The reported figures at one point, or in words why there are none. */
export type Operated =
  | { readonly figures: readonly Figure[]; readonly cannot?: undefined }
  | { readonly figures?: undefined; readonly cannot: string };

/** The network compiled at the flows of the duty, or why it cannot be. */
export function plantOf(
  { network, duty, values }: Operation,
  row: Row = noRow,
): { plant: Plant; cannot?: undefined } | { plant?: undefined; cannot: string } {
  const settings = { ...values, ...networkSettings(duty), ...row.vessel };
  const { plant, problems } = compile(network, withOff(network, settings, row));
  if (!plant) return { cannot: problems[0]?.message ?? "the vessel does not balance" };
  const broken = network.requires.find((r) => !(r.slack(plant.env) > 0));
  return broken ? { cannot: `\`requires: ${broken.text}\` does not hold` } : { plant };
}

/** What the duty reports, values of a row in place of all others. */
export function operate(operation: Operation, row: Row = noRow): Operated {
  const made = plantOf(operation, row);
  if (made.plant === undefined) return { cannot: made.cannot };
  const { duty } = operation;
  const settings = dutySettings(duty, row);
  const back = goesBack(duty, row);
  if (back !== undefined) return { cannot: back };
  const state = steadyState(made.plant, duty.chemistry, duty, settings);
  if (!state.converged) return { cannot: "the steady state did not converge" };
  return { figures: withTimes(made.plant, duty, figuresOf(made.plant, duty, state, settings), settings) };
}

/** Why a row that sets a constant of the chemistry below zero makes no sense: a law written to go one way would go back. */
function goesBack({ chemistry }: Duty, row: Row): string | undefined {
  const own = new Set(chemistry?.constants.map((c) => c.name));
  const set = Object.entries(row.duty).flatMap(([key, value]): [string, number][] => {
    const name = key.slice(key.lastIndexOf(".") + 1);
    return value < 0 && own.has(name) ? [[name, value]] : [];
  });
  if (!chemistry || set.length === 0 || backwardsWith(chemistry, new Map())) return undefined;
  const back = backwardsWith(chemistry, new Map(set));
  return back && `'${back.text}' would run backwards: its rate is negative at ${back.where}`;
}

/** Values of figures by number; undefined where there are none. */
export const valuesAt = (operation: Operation, row: Row): number[] | undefined =>
  operate(operation, row).figures?.map((f) => f.value);

/** Values of a network with those that lie off what other names make of them, each after what it depends on. */
function withOff(network: Network, settings: Settings, row: Row): Settings {
  const off = network.order.filter((slot) => {
    const { name } = network.names[slot];
    return row.off.vessel[name] !== undefined && row.vessel[name] === undefined;
  });
  if (off.length === 0) return settings;
  const whole: Record<string, number> = { ...settings };
  for (const slot of off) {
    const { name, value } = network.names[slot];
    const env = evaluateNames(network, whole);
    whole[name] = env[slot] + row.off.vessel[name] * (value.sd?.(env) ?? 0);
  }
  return whole;
}

/** What a row sets in a duty. */
export const dutySettings = (duty: Duty, row: Row): DutySettings => ({ ...row.duty, ...constantsOff(duty, row) });

/** The same for constants of the chemistry. */
function constantsOff(duty: Duty, row: Row): DutySettings {
  const { chemistry } = duty;
  if (!chemistry) return {};
  const n = chemistry.species.length;
  const found: Record<string, number> = {};
  for (const k of chemistry.order) {
    const { name, value } = chemistry.constants[k];
    const off = row.off.duty[name];
    if (off === undefined || row.duty[name] !== undefined) continue;
    const env = new Float64Array(chemistry.temperatureSlot + 1);
    env.set(constantsOf(chemistry, duty, { ...row.duty, ...found }), n);
    const middle = value.of(env);
    found[name] = sameSide(middle, middle + off * (value.sd?.(env) ?? 0));
  }
  return found;
}
