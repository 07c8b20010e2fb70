import type { Reaction } from "../model/chemistry.js";
import type { Slot, Tape } from "../numerics/tape.js";

/** Kinetics as places on a tape. */
export interface RecordedKinetics {
  /** What reaction makes of each component per second, scaled. */
  readonly made: readonly Slot[];
  /** d made_i / d y_j, i by i. */
  readonly slope: readonly (readonly Slot[])[];
}

/** A reaction, and what one unit of it makes of each component, SI. */
interface Counted {
  readonly reaction: Reaction;
  readonly numbers: Float64Array;
}

/**
 * Records laws that vanish where a reactant does.
 * @param constants values of the constants and then of the temperature, SI, in slot order after the species
 * @param scale     what counts as 1, per component, SI
 * @param y         scaled concentrations on the tape, none below zero
 * @returns undefined where a law has a kink
 */
export function recordKinetics(
  reactions: readonly Counted[],
  constants: ArrayLike<number>,
  scale: Float64Array,
  tape: Tape,
  y: readonly Slot[],
): RecordedKinetics | undefined {
  const species = y.map((slot, i) => tape.multiply(tape.constant(scale[i]), slot));
  const env = (slot: number): Slot =>
    slot < species.length ? species[slot] : tape.constant(constants[slot - species.length]);
  const none = tape.constant(0);
  const made = y.map(() => none);
  const slope = y.map(() => y.map(() => none));
  for (const { reaction, numbers } of reactions) {
    const law = reaction.record?.(tape, env);
    if (!law) return undefined;
    for (let i = 0; i < y.length; i++) {
      if (numbers[i] === 0) continue;
      const add = (sum: Slot, x: Slot, by: number): Slot => tape.add(sum, tape.multiply(tape.constant(by), x));
      made[i] = add(made[i], law.value, numbers[i] / scale[i]);
      for (let j = 0; j < y.length; j++) {
        slope[i][j] = add(slope[i][j], law.gradient[j], (numbers[i] * scale[j]) / scale[i]);
      }
    }
  }
  return { made, slope };
}
