import { recordExpression } from "../expressions/record.js";
import type { Network } from "../model/network.js";
import type { Value } from "../model/value.js";
import { type Slot, Tape } from "../numerics/tape.js";
import { evaluateNames } from "./evaluate.js";
import type { Settings } from "./plant.js";

/**
 * Why there is no recording: it cannot be written down once and for all, or only not at these values, where something that is
 * elsewhere is not.
 */
export type WhyNot = "never" | "here";

/** Thrown and caught within recording. */
export class NotRecorded extends Error {
  constructor(readonly why: WhyNot = "never") {
    super(why);
  }
}

/** What is recorded, or why it is not. */
export function recorded<T>(record: () => T): T | WhyNot {
  try {
    return record();
  } catch (e) {
    if (e instanceof NotRecorded) return e.why;
    throw e;
  }
}

/** A name that the day of a trial sets. Where it is a fact that a fit may move, the number that it is moved by is an input. */
export interface OnDay {
  readonly name: string;
  readonly value: Value;
  readonly fact?: string;
}

/** Facts that are inputs besides names, and by how much they are moved where the recording is made, SI. */
export type FactInputs = ReadonlyMap<string, number>;

/** A tape with the names of a network on it. */
export class Recorder {
  readonly tape = new Tape();
  /**
   * What must stay above zero for the recording to hold: nothing that is there vanishes, nothing becomes impossible. Where one
   * is not, compiling tells what there is.
   */
  readonly positive = new Set<Slot>();
  /** Inputs whose own value, by what the file says, moves with other inputs. */
  readonly following = new Set<string>();
  /** Values of names where it was recorded, and their slots; both by the names' places. */
  private env: Float64Array = new Float64Array(0);
  private slots: readonly Slot[] = [];

  private readonly facts: ReadonlyMap<string, Slot>;

  /**
   * @param inputs  names that are set from outside, in the order of the inputs
   * @param facts   inputs after them
   */
  constructor(
    private readonly network: Network,
    readonly inputs: readonly string[],
    settings: Settings,
    onDay: readonly OnDay[],
    facts: FactInputs = new Map(),
  ) {
    const set = new Map<string, Slot>(inputs.map((name) => [name, this.tape.input()]));
    this.facts = new Map([...facts.keys()].map((key) => [key, this.tape.input()]));
    this.names(settings, set);
    if (onDay.length === 0) return;
    const day = { ...settings };
    for (const { name, value, fact } of onDay) {
      day[name] = value.of(this.env) + (facts.get(fact ?? "") ?? 0);
      set.set(name, this.fact(value, fact));
    }
    this.names(day, set);
  }

  /** The facts that are inputs, in their order. */
  get factInputs(): readonly string[] {
    return [...this.facts.keys()];
  }

  /** A value, moved by what its fact is. */
  fact(value: Value, key: string | undefined): Slot {
    const by = key === undefined ? undefined : this.facts.get(key);
    return by === undefined ? this.value(value) : this.tape.add(this.value(value), by);
  }

  /** A value made of names. */
  value(value: Value): Slot {
    const slotOf = (name: string): Slot | undefined => {
      const named = this.network.names.find((n) => n.name === name);
      return named && this.slots[named.slot];
    };
    const stays = value.uses.every((name) => {
      const slot = slotOf(name);
      return slot !== undefined && this.tape.known(slot) !== undefined;
    });
    if (stays) return this.tape.constant(value.of(this.env));
    const slot = recordExpression(this.tape, value.expression, slotOf);
    if (slot === undefined) throw new NotRecorded();
    return slot;
  }

  /** The value where it was recorded. */
  at(value: Value): number {
    return value.of(this.env);
  }

  /** Value of a name. */
  named(slot: number): Slot {
    return this.slots[slot];
  }

  moves(slot: Slot): boolean {
    return this.tape.known(slot) === undefined;
  }

  /** What is above zero where it was recorded, and must stay so. */
  keepPositive(slot: Slot, here: number): void {
    if (!this.moves(slot)) return;
    if (!(here > 0)) throw new NotRecorded("here");
    this.positive.add(slot);
  }

  private names(settings: Settings, set: ReadonlyMap<string, Slot>): void {
    const { network } = this;
    const env = evaluateNames(network, settings);
    const slots: Slot[] = [];
    this.env = env;
    this.slots = slots;
    const bySlot = new Map(network.names.map((n) => [n.slot, n]));
    for (const slot of network.order) {
      const n = bySlot.get(slot);
      if (!n) continue;
      const given = set.get(n.name);
      const moves = (name: string): boolean => {
        const used = network.names.find((m) => m.name === name);
        return used !== undefined && slots[used.slot] !== undefined && this.moves(slots[used.slot]);
      };
      if (given !== undefined && n.value.uses.some(moves)) this.following.add(n.name);
      if (given === undefined && n.role === "inflow") throw new NotRecorded();
      slots[slot] = given ?? this.value(n.value);
    }
  }
}
