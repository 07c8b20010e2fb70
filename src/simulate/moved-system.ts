import type { DenseSystem } from "./driven-steps.js";
import type { Passage } from "./linear-system.js";
import type { Unrolled } from "./unroll.js";
import type { PassageSlope, UnrolledSlope } from "./unroll-slopes.js";

/** One passage to a probe and how it moves along every direction, its detector's lag made a state. */
export interface MovedPassage {
  /** s, and s per unit of t. */
  readonly delay: number;
  readonly delays: readonly number[];
  readonly states: Int32Array;
  readonly weights: Float64Array;
  readonly direct: number;
  /** By direction: weights on all states, and the undispersed part. */
  readonly moved: readonly { readonly weights: ReadonlyMap<number, number>; readonly direct: number }[];
}

/** A probe: where, and its line. */
export interface Probe {
  readonly node: number;
  readonly delay: number;
  readonly lag: number;
}

/** How a direction moves what is around the unrolled plant. */
export interface Around {
  /** d ln w / dt of the tracer rate. */
  readonly rate: number;
  /** By probe: s per unit of t. */
  readonly delay: readonly number[];
  readonly lag: readonly number[];
}

/** An unrolled plant with its probes, row by row, with derivatives along directions. */
export class MovedSystem {
  /** By state: column -> 1/s; then the same for every direction. */
  readonly rows: Map<number, number>[];
  readonly movedRows: Map<number, number>[][];
  readonly input: number[];
  readonly movedInput: number[][];
  readonly probes: readonly (readonly MovedPassage[])[];

  /** @param slopes  by direction; undefined where the plant stays as it is */
  constructor(
    unrolled: Unrolled,
    slopes: readonly (UnrolledSlope | undefined)[],
    probes: readonly Probe[],
    around: readonly Around[],
  ) {
    this.rows = unrolled.rows.map((row) => new Map(row));
    this.input = [...unrolled.input];
    this.movedRows = slopes.map((s) => this.rows.map((_, i) => new Map(s?.rows[i] ?? [])));
    this.movedInput = slopes.map((s, p) => this.input.map((b, i) => (s?.input[i] ?? 0) + around[p].rate * b));
    this.probes = probes.map((probe, r) => {
      const passages = unrolled.outflow(probe.node);
      const moved = slopes.map((s) => s?.outflow(probe.node));
      return passages.map((passage, k) => {
        const own = moved.map((m): PassageSlope => m?.[k] ?? still);
        const delays = own.map((m, p) => m.delay + around[p].delay[r]);
        const seen = this.seen(passage, own, around);
        const lagged = probe.lag > 0 ? this.lagged(seen, probe.lag, around, r) : seen;
        return { ...lagged, delay: passage.delay + probe.delay, delays };
      });
    });
  }

  /** The same densely. */
  dense(): DenseSystem {
    const n = this.rows.length;
    const count = 1 + this.movedRows.length;
    const a = new Float64Array(count * n * n);
    const b = new Float64Array(count * n);
    [this.rows, ...this.movedRows].forEach((rows, p) => {
      rows.forEach((row, i) => {
        for (const [j, x] of row) a[(p * n + i) * n + j] = x;
      });
    });
    [this.input, ...this.movedInput].forEach((input, p) => {
      b.set(input, p * n);
    });
    return { n, a, b };
  }

  private seen({ states, weights, direct }: Passage, own: readonly PassageSlope[], around: readonly Around[]) {
    const moved = own.map((m, p) => ({ weights: m.weights, direct: m.direct + around[p].rate * direct }));
    return { states, weights, direct, moved };
  }

  /** A first-order detector as one more state: y' = (seen - y) / lag. */
  private lagged(seen: Omit<MovedPassage, "delay" | "delays">, lag: number, around: readonly Around[], r: number) {
    const state = this.rows.length;
    const row = new Map<number, number>([[state, -1 / lag]]);
    seen.states.forEach((s, i) => {
      row.set(s, (row.get(s) ?? 0) + seen.weights[i] / lag);
    });
    this.rows.push(row);
    this.input.push(seen.direct / lag);
    seen.moved.forEach(({ weights, direct }, p) => {
      const grows = around[p].lag[r] / lag;
      const moved = new Map<number, number>();
      if (grows !== 0) for (const [s, x] of row) moved.set(s, -x * grows);
      for (const [s, w] of weights) moved.set(s, (moved.get(s) ?? 0) + w / lag);
      this.movedRows[p].push(moved);
      this.movedInput[p].push((direct - seen.direct * grows) / lag);
    });
    const moved = seen.moved.map(() => ({ weights: new Map<number, number>(), direct: 0 }));
    return { states: Int32Array.of(state), weights: Float64Array.of(1), direct: 0, moved };
  }
}

const still: PassageSlope = { delay: 0, weights: new Map(), direct: 0 };
