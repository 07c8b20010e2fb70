import type { Law } from "../expressions/law.js";
import type { Span } from "../text/source.js";
import type { Dimension } from "../units/dimension.js";
import type { Env, Value } from "./value.js";

/** Reactions with their rate laws bound to slots: Env = [species concentrations..., constants..., temperature]. */
export interface Chemistry {
  readonly title: string;
  readonly at: Span;
  readonly path: string;
  readonly species: readonly Species[];
  /** Slots species.length + i. */
  readonly constants: readonly ChemicalConstant[];
  /** Indices into `constants` in an order in which each depends on earlier ones only. */
  readonly order: readonly number[];
  /** Slot of the temperature, K: species.length + constants.length. */
  readonly temperatureSlot: number;
  /** True where a rate law or a constant asks for the temperature. */
  readonly needsTemperature: boolean;
  /** True where what a reaction makes of a species follows the temperature. */
  readonly makesFollowTemperature?: boolean;
  /** Of the liquid, J/(m3 K); undefined where the file does not say. */
  readonly heatCapacity?: Value | undefined;
  readonly reactions: readonly Reaction[];
  /**
   * Every way to give the species dimensions (molar, mass or number per volume) in which each rate is
   * concentration per time: one dimension per species. Several where the laws leave it open (all first order).
   */
  readonly bases: readonly (readonly Dimension[])[];
}

export interface ChemicalConstant {
  readonly name: string;
  readonly at: Span;
  /** An Arrhenius constant is an expression in `T`. */
  readonly value: Value;
  /**
   * d value / dT, 1/K times SI, with those of the other constants given by their index; undefined where the constant does not
   * follow the temperature.
   */
  readonly warmed?: ((env: Env, others: ArrayLike<number>) => number) | undefined;
  /** Of a parameter: what a fit may do with it. */
  readonly free?: Freedom;
}

/** How a fit may move a parameter. */
export interface Freedom {
  readonly between: readonly [Value, Value] | undefined;
  readonly spacing: "linear" | "log";
  readonly about: string | undefined;
}

export interface Species {
  readonly name: string;
  readonly at: Span;
  /** kg/mol. */
  readonly molarMass: Value | undefined;
}

export interface Reaction {
  /** The equation or `makes` as written. */
  readonly text: string;
  readonly at: Span;
  /** An equation counts molecules; `makes` counts whatever the concentrations count. */
  readonly counts: "molecules" | "as written";
  /** What one unit of reaction makes of each species, negative where consumed; species in neither side are left out. */
  readonly makes: readonly Made[];
  /** Rate, concentration per second (SI). */
  rate(env: Env): number;
  /** The same into out[at]: nothing is allocated, not even for the number. */
  writeRate(env: Env, out: Float64Array, at: number): void;
  /** d rate / d concentration of each species, same Env; writes into `out` (length: species), no allocation. */
  gradient(env: Env, out: Float64Array): void;
  /** Records rate and gradient on a tape that has the Env by slot; undefined where they have kinks, or where that is not known. */
  readonly record?: Law["record"] | undefined;
  /** d rate / dT, with those of the constants given by their index; undefined where the rate does not follow the temperature. */
  readonly warmed?: ((env: Env, constants: ArrayLike<number>) => number) | undefined;
  /** Heat of one unit of reaction, J, negative where it is set free; undefined where the file does not say. Needs constants only. */
  readonly heat?: Value | undefined;
}

export interface Made {
  readonly species: number;
  number(env: Env): number;
}
