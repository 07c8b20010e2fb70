import type { Span } from "../text/source.js";
import type { Dimension } from "../units/dimension.js";
import type { Value } from "./value.js";

/** Reactions with their rate laws bound to slots: Env = [species concentrations..., constants...]. */
export interface Chemistry {
  readonly title: string;
  readonly at: Span;
  readonly path: string;
  readonly species: readonly Species[];
  /** Slots species.length + i. */
  readonly constants: readonly { readonly name: string; readonly at: Span; readonly value: Value }[];
  readonly reactions: readonly Reaction[];
  /** Dimension of every concentration: molar, mass or number per volume; undefined where any would do (all first order). */
  readonly concentration: Dimension | undefined;
}

export interface Species {
  readonly name: string;
  readonly at: Span;
}

export interface Reaction {
  readonly text: string;
  readonly at: Span;
  /** Moles made per mole of reaction, by species; negative where consumed. Length: species. */
  readonly stoichiometry: Float64Array;
  /** Rate, concentration per second (SI). Env: [concentrations..., constants...]. */
  rate(env: ArrayLike<number>): number;
  /** d rate / d concentration of each species, same Env, same order; writes into `out`, no allocation. */
  gradient(env: ArrayLike<number>, out: Float64Array): void;
}
