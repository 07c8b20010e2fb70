import type { Program, Slot } from "../numerics/tape.js";
import { type DenseSystem, DrivenSteps } from "./driven-steps.js";
import { firstSeen } from "./moved-curves.js";
import type { RecordedPassage, RecordedPut, RecordedTrial } from "./record-trial.js";

import { addDirect, addSeen, addSeenOfTwo } from "./sights.js";

/** Curves of the readings and their derivatives by direction, SI. */
export interface Replayed {
  readonly curves: readonly Float64Array[];
  readonly slopes: readonly (readonly Float64Array[])[];
}

/** Memory for one injection with so many directions. */
interface Work {
  readonly put: RecordedPut;
  readonly directions: number;
  readonly system: DenseSystem;
  readonly steps: DrivenSteps;
  /** What a passage sees of the states, how that moves by direction, and how what is seen changes with time. */
  readonly weights: Float64Array;
  readonly moved: Float64Array;
  readonly rates: Float64Array;
}

/** Memory is kept for so many of them. */
const mostWork = 12;

/** A recorded trial that is run again and again at other values. */
export class Replay {
  private readonly program: Program;
  private readonly positive: Int32Array;
  private readonly work: Work[] = [];

  constructor(
    private readonly recorded: RecordedTrial,
    private readonly decay: number,
  ) {
    this.program = recorded.recorder.tape.program();
    this.positive = Int32Array.from(recorded.recorder.positive);
  }

  /** Names of the inputs, in their order. */
  get inputs(): readonly string[] {
    return this.recorded.recorder.inputs;
  }

  /** Facts of the trial that are inputs after the names: by how much each is moved, SI. */
  get facts(): readonly string[] {
    return this.recorded.recorder.factInputs;
  }

  /** Does an input that is a name's value shifted stay where it is, whatever the other inputs do? */
  staysShifted(name: string): boolean {
    return !this.recorded.recorder.following.has(name);
  }

  /**
   * @param inputs  SI
   * @param seeds   by input and direction, `directions` in a row for each input
   * @returns undefined where the recording does not hold
   */
  run(
    inputs: Float64Array,
    wanted: readonly { readonly time: Float64Array }[],
    seeds: Float64Array,
    directions: number,
  ): Replayed | undefined {
    if (!this.holds(inputs)) return undefined;
    this.program.slopes(seeds, directions);
    // One piece of memory for all: many small ones cost more than what is written to them.
    const size = wanted.reduce((sum, { time }) => sum + time.length, 0);
    const all = new Float64Array(size * (1 + directions));
    let place = 0;
    const zeros = (): Float64Array[] =>
      wanted.map(({ time }) => {
        place += time.length;
        return all.subarray(place - time.length, place);
      });
    const curves = zeros();
    const slopes = Array.from({ length: directions }, zeros);
    for (const put of this.recorded.puts) this.add(put, wanted, directions, { curves, slopes });
    return { curves, slopes };
  }

  /** Transport delays of the plant's tubes, s; undefined where the recording does not hold. */
  delays(inputs: Float64Array): number[] | undefined {
    return this.holds(inputs) ? this.recorded.tubes.map((slot) => this.program.value[slot]) : undefined;
  }

  /** Plays the numbers; are all that must be above zero? */
  private holds(inputs: Float64Array): boolean {
    const { program, positive } = this;
    program.run(inputs);
    for (let i = 0; i < positive.length; i++) if (!(program.value[positive[i]] > 0)) return false;
    return true;
  }

  private add(
    put: RecordedPut,
    wanted: readonly { readonly time: Float64Array }[],
    directions: number,
    into: Replayed,
  ): void {
    const n = put.states;
    const work = this.workFor(put, directions);
    const { a, b } = work.system;
    for (const { row, column, slot } of put.rates) this.spread(slot, directions, a, row * n + column, n * n);
    for (let i = 0; i < n; i++) this.spread(put.input[i], directions, b, i, n);
    work.steps.reset(work.system);
    for (const passage of put.passages) this.addPassage(passage, put.start, work, wanted, into);
  }

  /** Memory for a system with so many directions. */
  private workFor(put: RecordedPut, directions: number): Work {
    const known = this.work.find((w) => w.put === put && w.directions === directions);
    if (known) return known;
    const n = put.states;
    const system = { n, a: new Float64Array((1 + directions) * n * n), b: new Float64Array((1 + directions) * n) };
    const work: Work = {
      put,
      directions,
      system,
      steps: new DrivenSteps(system, put.drive),
      weights: new Float64Array(n),
      moved: new Float64Array(directions * n),
      rates: new Float64Array(n),
    };
    this.work.push(work);
    if (this.work.length > mostWork) this.work.shift();
    return work;
  }

  /** A number and its derivatives, `apart` from one to the next. */
  private spread(slot: Slot, directions: number, into: Float64Array, at: number, apart: number): void {
    const { value, slope } = this.program;
    into[at] = value[slot];
    for (let d = 0; d < directions; d++) into[at + (d + 1) * apart] = slope[slot * directions + d];
  }

  private addPassage(
    passage: RecordedPassage,
    start: number,
    { system: { n, a, b }, steps, weights: w, moved: dw, rates }: Work,
    wanted: readonly { readonly time: Float64Array }[],
    into: Replayed,
  ): void {
    const { reading, share, states } = passage;
    const { time } = wanted[reading];
    const count = into.slopes.length;
    const { value: v, slope } = this.program;
    const delay = v[passage.delay];
    const first = firstSeen(time, delay, start);
    w.fill(0);
    dw.fill(0);
    rates.fill(0);
    for (let j = 0; j < states.length; j++) {
      w[states[j]] = v[passage.weights[j]];
      for (let d = 0; d < count; d++) dw[d * n + states[j]] = slope[passage.weights[j] * count + d];
    }
    let rateOfDrive = 0;
    for (let i = 0; i < n; i++) {
      rateOfDrive += w[i] * b[i];
      for (let j = 0; j < n; j++) rates[j] += w[i] * a[i * n + j];
    }
    const direct = v[passage.direct];
    const path = steps.along(time, first, { start, delay }, states.length > 0);
    const counts = this.counting(share, start, time, first);
    const size = time.length - first;
    const see = (onto: Float64Array, block: number, onward: number, turn: number): void => {
      const add = states.length === 0 ? addDirect : n === 2 ? addSeenOfTwo : addSeen;
      add({ onto, first, size, counts, n, path, block, w, v: dw, from: (block - 1) * n, onward, turn });
    };
    see(into.curves[reading], 0, direct, 0);
    for (let d = 0; d < count; d++) {
      const late = slope[passage.delay * count + d];
      const onward = slope[passage.direct * count + d] - late * rateOfDrive;
      for (let j = 0; j < n; j++) dw[d * n + j] -= late * rates[j];
      see(into.slopes[d][reading], d + 1, onward, -late * direct);
    }
  }

  /** By time: the share that a reading draws, as far as it has not decayed; undefined where it is all. */
  private counting(share: number, start: number, time: Float64Array, first: number): Float64Array | undefined {
    const { decay } = this;
    if (share === 1 && decay === 0) return undefined;
    return time.subarray(first).map((t) => share * Math.exp(-decay * (t - start)));
  }
}
