import type { Realization } from "../compartments/realization.js";
import type { Kinetics } from "../reaction/kinetics.js";
import { Carried } from "./blends.js";
import type { Scene } from "./scene.js";
import type { Signal } from "./signal.js";

/** A cell, or the mixed states of a body, in the state vector of a stage. */
export interface Held {
  readonly node: number;
  /** First state and how many, each a whole mixture. */
  readonly first: number;
  readonly states: number;
  readonly realization: Realization | undefined;
  /** By state. */
  readonly kinetics: readonly Kinetics[];
  /** m3, of each state. */
  readonly volume: Float64Array;
}

interface Inflow {
  /** Numbers of bodies here, and of signals from elsewhere, and where the part of what enters that each makes is. */
  readonly own: readonly (readonly [body: number, place: number])[];
  readonly from: readonly (readonly [signal: number, place: number])[];
}

/**
 * Balances of the cells and states of a stage, species by species: what flows in and out, what goes on within a body, and
 * reaction. The state vector holds mixture after mixture.
 */
export class Stage {
  readonly held: readonly Held[];
  /** Length of the state vector. */
  readonly size: number;
  readonly pattern: { readonly size: number; readonly start: Int32Array; readonly column: Int32Array };
  private readonly signals: readonly Signal[];
  private readonly inflow: readonly Inflow[];
  private readonly nodes: readonly number[];
  private readonly width: number;
  private readonly outside: Float64Array;
  private readonly leaving: Float64Array;
  private readonly entering: Float64Array;
  private readonly flowing: Float64Array;
  /** Entries of the Jacobian that flows make, and where those of reaction go, state by state. */
  private readonly fixed: Float64Array;
  /** The flows that `fixed` is for. */
  private stamp = Number.NaN;
  private readonly places: Int32Array;
  private readonly slope: Float64Array;

  constructor(
    private readonly scene: Scene,
    nodes: readonly number[],
    signalOf: (source: number) => Signal,
  ) {
    const { width, plant, follow, blends } = scene;
    this.width = width;
    let first = 0;
    this.held = nodes.map((node): Held => {
      const f = follow[node];
      const realization = f?.is === "states" ? f.realization : undefined;
      const volume = realization?.held ?? Float64Array.of(plant.columns.volume[node]);
      const { cell, pocket } = scene.at(node);
      const flowing = f?.is === "states" ? f.flowing : 1;
      const kinetics = Array.from(volume, (_, s) => (s < flowing ? cell : pocket));
      const own = { node, first, states: volume.length, realization, volume, kinetics };
      first += volume.length;
      return own;
    });
    this.size = first * width;
    this.nodes = nodes;
    const place = new Map(nodes.map((node, b) => [node, b]));
    const signals: Signal[] = [];
    const numbers = new Map<number, number>();
    this.inflow = nodes.map((node) => {
      const own: [number, number][] = [];
      const from: [number, number][] = [];
      if (!(plant.columns.inflow[node] > 0)) return { own, from };
      blends.sources(node).forEach((source, j) => {
        const body = place.get(source);
        const part = blends.first(node) + j;
        if (body !== undefined) own.push([body, part]);
        else {
          let k = numbers.get(source);
          if (k === undefined) {
            k = signals.push(signalOf(source)) - 1;
            numbers.set(source, k);
          }
          from.push([k, part]);
        }
      });
      return { own, from };
    });
    this.signals = signals;
    this.outside = new Float64Array(signals.length * width);
    this.leaving = new Float64Array(nodes.length * width);
    this.entering = new Float64Array(width);
    this.flowing = new Float64Array(this.size);
    this.slope = new Float64Array(width * width);
    const rows = this.flowRows(0);
    this.pattern = this.patternOf(scene.blends.apart ? together(rows, this.flowRows(0, Carried.warmth)) : rows);
    this.fixed = new Float64Array(this.pattern.column.length);
    this.places = new Int32Array(first * width * width);
    this.place();
    this.fill(rows, 0);
  }

  /** Writes what leaves a body: into[at ...]. */
  outflow(body: number, x: Float64Array, into: Float64Array, at: number): void {
    const { width } = this;
    const { first, realization, states } = this.held[body];
    if (!realization) {
      for (let i = 0; i < width; i++) into[at + i] = x[first * width + i];
      return;
    }
    for (let i = 0; i < width; i++) into[at + i] = 0;
    for (let s = 0; s < states; s++) {
      const c = realization.output[s];
      if (c !== 0) for (let i = 0; i < width; i++) into[at + i] += c * x[(first + s) * width + i];
    }
  }

  rhs(t: number, x: Float64Array, dx: Float64Array, side: number): void {
    for (const { first, states, kinetics } of this.held) {
      for (let s = 0; s < states; s++) {
        const at = (first + s) * this.width;
        kinetics[s].production(x, at, dx, at);
      }
    }
    this.addFlow(t, x, dx, side);
  }

  /** Adds what flows do to each state. */
  private addFlow(t: number, x: Float64Array, dx: Float64Array, side: number): void {
    const { width, held, signals, outside, leaving, entering, inflow, nodes, scene } = this;
    const { node: through } = scene.course.at(t, side);
    const parts = scene.blends.at(t, side);
    const warm = scene.blends.apart ? scene.blends.at(t, side, Carried.warmth) : undefined;
    const last = width - 1;
    for (let k = 0; k < signals.length; k++) signals[k].read(t, side, outside, k * width);
    for (let b = 0; b < held.length; b++) this.outflow(b, x, leaving, b * width);
    for (let b = 0; b < held.length; b++) {
      const { first, states, realization, volume } = held[b];
      const { own, from } = inflow[b];
      const q = through[nodes[b]];
      entering.fill(0);
      for (let e = 0; e < own.length; e++) {
        const [body, place] = own[e];
        const part = parts[place];
        for (let i = 0; i < width; i++) entering[i] += part * leaving[body * width + i];
        if (warm) entering[last] += (warm[place] - part) * leaving[body * width + last];
      }
      for (let e = 0; e < from.length; e++) {
        const [signal, place] = from[e];
        const part = parts[place];
        for (let i = 0; i < width; i++) entering[i] += part * outside[signal * width + i];
        if (warm) entering[last] += (warm[place] - part) * outside[signal * width + last];
      }
      if (!realization) {
        const rate = q / volume[0];
        for (let i = 0; i < width; i++) dx[first * width + i] += rate * (entering[i] - x[first * width + i]);
        continue;
      }
      const { through: a, still, input } = realization;
      for (let s = 0; s < states; s++) {
        const to = (first + s) * width;
        if (input[s] !== 0) for (let i = 0; i < width; i++) dx[to + i] += q * input[s] * entering[i];
        for (let e = a.start[s]; e < a.start[s + 1]; e++) {
          const j = (first + a.column[e]) * width;
          for (let i = 0; i < width; i++) dx[to + i] += q * a.value[e] * x[j + i];
        }
        for (let e = still.start[s]; e < still.start[s + 1]; e++) {
          const j = (first + still.column[e]) * width;
          for (let i = 0; i < width; i++) dx[to + i] += still.value[e] * x[j + i];
        }
      }
    }
  }

  jacobian(t: number, x: Float64Array, entries: Float64Array): void {
    const { width, slope, places } = this;
    if (this.scene.course.at(t, 1).stamp !== this.stamp) this.fill(this.flowRows(t), t);
    entries.set(this.fixed);
    for (const { first, states, kinetics } of this.held) {
      for (let s = first; s < first + states; s++) {
        kinetics[s - first].jacobian(x, s * width, slope, 0);
        // Less than nothing counts as none: there rates do not move.
        for (let j = 0; j < width; j++) {
          if (x[s * width + j] < 0) for (let i = 0; i < width; i++) slope[i * width + j] = 0;
        }
        const at = s * width * width;
        for (let e = 0; e < width * width; e++) entries[places[at + e]] += slope[e];
      }
    }
  }

  /** Adds what is held, amount by component (scaled concentration times m3), of one body. */
  addHeld(body: number, x: Float64Array, sum: Float64Array): void {
    const { first, states, volume } = this.held[body];
    for (let s = 0; s < states; s++) {
      for (let i = 0; i < this.width; i++) sum[i] += volume[s] * x[(first + s) * this.width + i];
    }
  }

  /** Adds what flows bring all that is held here, less what they take away, amount per second times a factor. */
  addNetFlow(t: number, x: Float64Array, side: number, factor: number, sum: Float64Array): void {
    const { flowing, width } = this;
    flowing.fill(0);
    this.addFlow(t, x, flowing, side);
    for (const { first, states, volume } of this.held) {
      for (let s = 0; s < states; s++) {
        for (let i = 0; i < width; i++) sum[i] += factor * volume[s] * flowing[(first + s) * width + i];
      }
    }
  }

  /** How what flows moves each state with each other at a time, 1/s: the same for every component that is carried alike. */
  private flowRows(t: number, of: Carried = Carried.liquid): Map<number, number>[] {
    const { blends, course } = this.scene;
    const { node: through } = course.at(t, 1);
    const parts = blends.at(t, 1, of);
    const rows = Array.from({ length: this.size / this.width }, (_, s) => new Map<number, number>([[s, 0]]));
    const add = (s: number, j: number, a: number): void => {
      if (a !== 0) rows[s].set(j, (rows[s].get(j) ?? 0) + a);
    };
    this.held.forEach(({ first, states, realization, volume }, b) => {
      const q = through[this.nodes[b]];
      const bring = (s: number, a: number): void => {
        for (const [body, place] of this.inflow[b].own) {
          const part = parts[place];
          const of = this.held[body];
          if (!of.realization) add(s, of.first, a * part);
          else for (let k = 0; k < of.states; k++) add(s, of.first + k, a * part * of.realization.output[k]);
        }
      };
      if (!realization) {
        bring(first, q / volume[0]);
        add(first, first, -q / volume[0]);
        return;
      }
      const { through: a, still, input } = realization;
      for (let s = 0; s < states; s++) {
        if (input[s] !== 0) bring(first + s, q * input[s]);
        for (let e = a.start[s]; e < a.start[s + 1]; e++) add(first + s, first + a.column[e], q * a.value[e]);
        for (let e = still.start[s]; e < still.start[s + 1]; e++)
          add(first + s, first + still.column[e], still.value[e]);
      }
    });
    return rows;
  }

  /** Flow ties like with like; reaction ties all components of a state. */
  private patternOf(rows: readonly ReadonlyMap<number, number>[]): Stage["pattern"] {
    const { width } = this;
    const start = new Int32Array(this.size + 1);
    rows.forEach((row, s) => {
      for (let i = 0; i < width; i++) start[s * width + i + 1] = start[s * width + i] + row.size - 1 + width;
    });
    const column = new Int32Array(start[this.size]);
    rows.forEach((row, s) => {
      const columns = [...row.keys()].sort((a, b) => a - b);
      for (let i = 0; i < width; i++) {
        let k = start[s * width + i];
        for (const j of columns) {
          if (j !== s) column[k++] = j * width + i;
          else for (let c = 0; c < width; c++) column[k++] = s * width + c;
        }
      }
    });
    return { size: this.size, start, column };
  }

  private place(): void {
    const { width, pattern, places } = this;
    for (let row = 0; row < this.size; row++) {
      const s = Math.floor(row / width);
      for (let k = pattern.start[row]; k < pattern.start[row + 1]; k++) {
        const j = Math.floor(pattern.column[k] / width);
        if (j === s) places[row * width + pattern.column[k] - j * width] = k;
      }
    }
  }

  private fill(rows: readonly ReadonlyMap<number, number>[], t: number): void {
    const { width, pattern, fixed } = this;
    this.stamp = this.scene.course.at(t, 1).stamp;
    const warm = this.scene.blends.apart ? this.flowRows(t, Carried.warmth) : rows;
    rows.forEach((liquid, s) => {
      for (let i = 0; i < width; i++) {
        const row = i === width - 1 ? warm[s] : liquid;
        for (let k = pattern.start[s * width + i]; k < pattern.start[s * width + i + 1]; k++) {
          const j = Math.floor(pattern.column[k] / width);
          if (pattern.column[k] - j * width === i) fixed[k] = row.get(j) ?? 0;
        }
      }
    });
  }
}

/** Rows with what either has. */
const together = (
  a: readonly ReadonlyMap<number, number>[],
  b: readonly ReadonlyMap<number, number>[],
): ReadonlyMap<number, number>[] => a.map((row, s) => new Map([...row, ...b[s]]));
