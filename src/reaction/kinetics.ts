import type { Reaction } from "../model/chemistry.js";
import type { Env } from "../model/value.js";
import type { Slot, Tape } from "../numerics/tape.js";
import { type RecordedKinetics, recordKinetics } from "./recorded-kinetics.js";

/**
 * A chemistry at fixed constants and temperature, in scaled concentrations y = c / scale, so that one tolerance suits all
 * species. The arrays are the caller's; nothing is allocated by a call.
 */
export interface Kinetics {
  /** Components of a mixture: the species and, where heat is balanced, the temperature after them. */
  readonly size: number;
  readonly thermal: boolean;
  /** True where a law asks for more when a reactant has run out (zero order). */
  readonly endures: boolean;
  /** Concentration (SI) of y = 1, per species; kelvins, of the temperature. */
  readonly scale: Float64Array;
  /** What one unit of each reaction makes of each component, scaled. */
  readonly numbers: readonly Float64Array[];
  /** Writes what reaction makes per second, scaled, at y[at ...] into out[to ...]. */
  production(y: ArrayLike<number>, at: number, out: Float64Array, to: number): void;
  /** Writes d production_i / d y_j at y[at ...] into out[to + i * size + j]. */
  jacobian(y: ArrayLike<number>, at: number, out: Float64Array, to: number): void;
  /** Records both on a tape, where they are plain arithmetic of the y (none below zero): for loops over many cells. */
  record?(tape: Tape, y: readonly Slot[]): RecordedKinetics | undefined;
}

/** Kinetics of a chemistry by itself. */
export interface Bound extends Kinetics {
  /** Marks the species that a law uses up which still asks for them at zero: at or below `depleted` nothing is left of them. */
  readonly spends: Uint8Array;
}

/** What reacts in one body: mixed cells limit what runs out, tubes cut it; pockets beside the flow are mixed cells. */
export interface Reactions {
  readonly cell: Kinetics;
  readonly tube: Kinetics;
  readonly pocket: Kinetics;
}

/**
 * Scaled amount of a reactant below which a law that does not vanish without it (zero order) is let down to nothing, so
 * that a mixed cell never consumes what is not there.
 */
export const depleted = 1e-12;
/** Scaled concentration at which derivatives are taken where it is zero: half-order laws are infinitely steep there. */
const nearlyNone = 1e-14;

/** How rates follow a temperature that is part of the state, and how reactions move it. */
export interface Thermal {
  /** K by which one unit of each reaction per m3 warms the liquid. */
  readonly rise: Float64Array;
  /** Works out in an Env what follows its temperature. */
  settle(env: Float64Array): void;
  /** Works out how that leans on the temperature: before `warmed`. */
  lean(env: Float64Array): void;
  /** d rate / dT of a reaction. */
  warmed(reaction: number, env: Float64Array): number;
}

/** What kinetics need of a chemistry. */
export interface Laws {
  readonly species: { readonly length: number };
  readonly reactions: readonly Reaction[];
}

/**
 * Binds rate laws to their constants.
 * @param constants values of the constants and then of the temperature, SI, in slot order after the species
 * @param scale what counts as 1, per component (SI), above zero
 * @param depletion what a law does that still asks for a reactant when that has run out: "limited" ramps it down (in mixed
 *   cells); "cut" lets it run on below zero and stops it at exactly zero, for a solver that finds the moment (along a tube,
 *   where a ramp would be stiff)
 */
export function bindKinetics(
  chemistry: Laws,
  constants: ArrayLike<number>,
  scale: Float64Array,
  depletion: "limited" | "cut",
  thermal?: Thermal,
): Bound {
  const species = chemistry.species.length;
  const n = thermal ? species + 1 : species;
  const env = new Float64Array(species + constants.length);
  for (let k = 0; k < constants.length; k++) env[species + k] = constants[k];
  const temperature = env.length - 1;
  if (thermal) {
    env[temperature] = scale[species];
    thermal.settle(env);
  }
  const reactions = chemistry.reactions.map((reaction, k) => {
    const numbers = new Float64Array(n);
    for (const made of reaction.makes) numbers[made.species] += made.number(env);
    const persists = persistence(reaction.rate, env, scale, numbers.subarray(0, species));
    if (thermal) numbers[species] = thermal.rise[k];
    const moved = Int32Array.from([...numbers.keys()].filter((i) => numbers[i] !== 0));
    const scaled = Float64Array.from(moved, (i) => numbers[i] / scale[i]);
    return { reaction, numbers, persists, helped: persists.includes(1), moved, scaled };
  });
  const rates = new Float64Array(reactions.length);
  const slope = new Float64Array(n);

  /** Puts the state into the environment; negative concentrations count as none. */
  const load = (y: ArrayLike<number>, at: number, least: number): void => {
    for (let i = 0; i < species; i++) env[i] = Math.max(y[at + i], least) * scale[i];
    if (!thermal) return;
    env[temperature] = y[at + species] * scale[species];
    thermal.settle(env);
  };

  const limited = depletion === "limited";
  const plain = !thermal && reactions.every(({ helped }) => !helped);

  return {
    size: n,
    thermal: thermal !== undefined,
    endures: reactions.some(({ persists }) => persists.includes(1)),
    spends: Uint8Array.from({ length: species }, (_, i) => (reactions.some((r) => r.persists[i] === 1) ? 1 : 0)),
    scale,
    numbers: reactions.map(({ numbers }) => numbers.map((x, i) => x / scale[i])),
    ...(plain
      ? { record: (tape: Tape, y: readonly Slot[]) => recordKinetics(reactions, constants, scale, tape, y) }
      : {}),
    production(y, at, out, to) {
      load(y, at, 0);
      for (let i = 0; i < n; i++) out[to + i] = 0;
      for (let k = 0; k < reactions.length; k++) {
        const { reaction, numbers, persists, helped, moved, scaled } = reactions[k];
        reaction.writeRate(env, rates, k);
        const asked = rates[k];
        const rate = helped ? asked * supply(y, at, asked, numbers, persists, limited) : asked;
        for (let m = 0; m < moved.length; m++) out[to + moved[m]] += scaled[m] * rate;
      }
    },
    jacobian(y, at, out, to) {
      out.fill(0, to, to + n * n);
      load(y, at, nearlyNone);
      thermal?.lean(env);
      for (let k = 0; k < reactions.length; k++) {
        const { reaction, numbers, persists, helped, moved, scaled } = reactions[k];
        reaction.gradient(env, slope);
        if (thermal) slope[species] = thermal.warmed(k, env);
        if (helped) reaction.writeRate(env, rates, k);
        const rate = helped ? rates[k] : 0;
        const share = helped ? supply(y, at, rate, numbers, persists, limited) : 1;
        for (let j = 0; j < n; j++) {
          let d = Number.isFinite(slope[j]) ? slope[j] * scale[j] * share : 0;
          if (limited && persists[j] && consumes(rate, numbers[j]) && y[at + j] < depleted) d += rate / depleted;
          if (d === 0) continue;
          for (let m = 0; m < moved.length; m++) out[to + moved[m] * n + j] += scaled[m] * d;
        }
      }
    },
  };
}

/** True where a reaction running at this rate uses the species up. */
const consumes = (rate: number, number: number): boolean => rate * number < 0;

/**
 * The fraction of its rate that a reaction can keep up with what is left of the reactants that it would ask for even at zero;
 * the others need no help.
 */
function supply(
  y: ArrayLike<number>,
  at: number,
  rate: number,
  numbers: Float64Array,
  persists: Uint8Array,
  limited: boolean,
): number {
  let share = 1;
  for (let i = 0; i < persists.length; i++) {
    if (!persists[i] || !consumes(rate, numbers[i])) continue;
    if (limited) share = Math.min(share, Math.max(y[at + i], 0) / depleted);
    else if (y[at + i] === 0) share = 0;
  }
  return share;
}

/** Marks the species without which the law still asks for a rate: those need the ramp. */
function persistence(
  rate: (env: Env) => number,
  env: Float64Array,
  scale: Float64Array,
  numbers: Float64Array,
): Uint8Array {
  const marks = new Uint8Array(numbers.length);
  for (let i = 0; i < numbers.length; i++) {
    if (numbers[i] === 0) continue;
    env.set(scale.subarray(0, numbers.length));
    env[i] = 0;
    const asked = rate(env);
    if (Number.isFinite(asked) && consumes(asked, numbers[i])) marks[i] = 1;
  }
  env.fill(0, 0, numbers.length);
  return marks;
}
