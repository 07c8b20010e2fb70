import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { constantsOf, type DutySettings } from "./constants.js";
import type { Thermal } from "./kinetics.js";

/** What a draw calls the heat of a reaction. */
export const heatName = (equation: string): string => `heat of ${equation}`;

/**
 * How the constants of a chemistry follow a temperature that is part of the state. A setting for one that does scales its law
 * everywhere, so that it has that value at the reference temperature.
 * @param capacity heat capacity of the liquid, J/(m3 K)
 */
export function thermalOf(chemistry: Chemistry, duty: Duty, settings: DutySettings, capacity: number): Thermal {
  const { constants, reactions, species } = chemistry;
  const n = species.length;
  const env = new Float64Array(chemistry.temperatureSlot + 1);
  env.set(constantsOf(chemistry, duty, settings), n);
  const heats = reactions.map(({ text, heat }) => settings[heatName(text)] ?? heat?.of(env) ?? 0);
  const following = chemistry.order.filter((k) => constants[k].warmed !== undefined);
  const factor = constants.map(({ name }, k) => {
    const set = constants[k].warmed && settings[name];
    return set === undefined ? 1 : set / constantsOf(chemistry, duty)[k];
  });
  const leaning = new Float64Array(constants.length);
  return {
    rise: Float64Array.from(heats, (heat) => -heat / capacity),
    settle(at) {
      for (const k of following) at[n + k] = factor[k] * constants[k].value.of(at);
    },
    lean(at) {
      for (const k of following) leaning[k] = factor[k] * (constants[k].warmed?.(at, leaning) ?? 0);
    },
    warmed: (reaction, at) => reactions[reaction].warmed?.(at, leaning) ?? 0,
  };
}
