import { Part } from "../compile/plant.js";
import type { RecordedPlant } from "../compile/record.js";
import { NotRecorded } from "../compile/recorder.js";
import type { Slot, SmoothFunction } from "../numerics/tape.js";

/** A concentration as a sum over states, and what of it passes undispersed; places on the tape. */
export interface Sum {
  readonly weights: ReadonlyMap<number, Slot>;
  readonly direct: Slot;
}

/** Tracer that has passed the same tubes. */
interface Copy {
  /** s */
  readonly delay: Slot;
  readonly seeds: ReadonlyMap<number, Sum>;
  readonly outflow: Map<number, Sum>;
}

/** More copies of a network than these are left to `unroll`, which knows which of them come too late. */
const mostCopies = 16;

/** e^(-loss t). */
const fading = (loss: number): SmoothFunction => ({
  value: ([t]) => Math.exp(-loss * t),
  partials: [([t]) => -loss * Math.exp(-loss * t)],
});

/**
 * `unroll` on a tape: the same balances of copies with clocks of their own, one for each way through tubes. Delays that happen
 * to be equal stay apart.
 */
export class RecordedUnrolling {
  /** By state: column -> 1/s; and 1/m3 times the tracer rate. */
  readonly rows: Map<number, Slot>[] = [];
  readonly input: Slot[] = [];
  private readonly copies: Copy[] = [];
  private readonly zero: Slot;
  private readonly nothing: Sum;

  /**
   * @param size  what the unit of the drive stands for
   * @param tracer  loss of first order, 1/s, and how much more volume than the liquid's each node shows the tracer
   * @throws NotRecorded where tubes lie in circles, joints feed each other round and round, or there are too many ways
   */
  constructor(
    private readonly recorded: RecordedPlant,
    private readonly entry: number,
    private readonly size: Slot,
    private readonly tracer: { readonly loss: number; readonly held: (node: number) => Slot },
  ) {
    const { plant, recorder } = recorded;
    this.zero = recorder.tape.constant(0);
    this.nothing = { weights: new Map(), direct: this.zero };
    if (plant.structure.tubeInLoop || plant.columns.part.includes(Part.Block)) throw new NotRecorded();
    if (plant.structure.joints.some((group) => group.length > 1)) throw new NotRecorded();
    if (plant.from.some((f, k) => f === plant.to[k] && plant.columns.part[f] === Part.Joint)) throw new NotRecorded();
    const waiting: Pick<Copy, "delay" | "seeds">[] = [{ delay: this.zero, seeds: new Map() }];
    for (let next = waiting.shift(); next; next = waiting.shift()) {
      if (this.copies.length === mostCopies) throw new NotRecorded();
      for (const { tube, inlet, delay } of this.copy(next)) waiting.push({ delay, seeds: new Map([[tube, inlet]]) });
    }
  }

  /** Concentration leaving a node, one passage per copy that gets there. */
  outflow(node: number): (Sum & { readonly delay: Slot })[] {
    return this.copies.flatMap(({ delay, outflow, seeds }) => {
      const sum = outflow.get(node) ?? seeds.get(node);
      return sum && (sum.weights.size > 0 || sum.direct !== this.zero) ? [{ ...sum, delay }] : [];
    });
  }

  private copy({ delay, seeds }: Pick<Copy, "delay" | "seeds">): { tube: number; inlet: Sum; delay: Slot }[] {
    const { recorded, rows, input } = this;
    const { plant, inflow, recorder } = recorded;
    const { tape } = recorder;
    const volume = (i: number): Slot => tape.multiply(recorded.volume[i], this.tracer.held(i));
    const { part } = plant.columns;
    const first = this.copies.length === 0;
    const reached = this.reach(seeds, first);
    const outflow = new Map<number, Sum>();
    this.copies.push({ delay, seeds, outflow });
    const states = new Map<number, number>();
    for (const i of reached) {
      if (part[i] !== Part.Cell) continue;
      states.set(i, rows.push(new Map()) - 1);
      input.push(this.zero);
      outflow.set(i, { weights: new Map([[rows.length - 1, tape.constant(1)]]), direct: this.zero });
    }
    const entering = (i: number): Sum => {
      const weights = new Map<number, Slot>();
      let direct = first && i === this.entry ? this.size : this.zero;
      const { into } = plant.structure;
      for (let e = into.start[i]; e < into.start[i + 1]; e++) {
        const k = into.edges[e];
        const source = outflow.get(plant.from[k]) ?? seeds.get(plant.from[k]) ?? this.nothing;
        const q = recorded.flow[k];
        direct = tape.add(direct, tape.multiply(q, source.direct));
        for (const [s, w] of source.weights) {
          weights.set(s, tape.add(weights.get(s) ?? this.zero, tape.multiply(q, w)));
        }
      }
      return { weights, direct };
    };
    const over = ({ weights, direct }: Sum, by: Slot): Sum => ({
      weights: new Map([...weights].map(([s, w]) => [s, tape.divide(w, by)])),
      direct: tape.divide(direct, by),
    });
    // Joints in flow order: each is a blend of what is known by then.
    for (const [i] of plant.structure.joints) {
      if (reached.has(i)) outflow.set(i, over(entering(i), inflow[i]));
    }
    for (const [i, state] of states) {
      const inward = over(entering(i), volume(i));
      const row = rows[state];
      const leaving = tape.divide(inflow[i], volume(i));
      row.set(state, tape.negate(tape.add(leaving, tape.constant(this.tracer.loss))));
      for (const [s, w] of inward.weights) row.set(s, tape.add(row.get(s) ?? this.zero, w));
      input[state] = inward.direct;
    }
    return [...reached]
      .filter((i) => part[i] === Part.Delay)
      .map((tube) => {
        const own = tape.divide(volume(tube), inflow[tube]);
        const inlet = over(entering(tube), inflow[tube]);
        return { tube, inlet: this.lessLoss(inlet, own), delay: tape.add(delay, own) };
      });
  }

  /** What is left of tracer after a time. */
  private lessLoss(sum: Sum, time: Slot): Sum {
    const { loss } = this.tracer;
    if (loss === 0) return sum;
    const { tape } = this.recorded.recorder;
    const left = tape.call(fading(loss), [time]);
    return {
      weights: new Map([...sum.weights].map(([s, w]) => [s, tape.multiply(w, left)])),
      direct: tape.multiply(sum.direct, left),
    };
  }

  /** Nodes that tracer gets to without passing another tube. */
  private reach(seeds: ReadonlyMap<number, Sum>, first: boolean): Set<number> {
    const { to, flow, columns } = this.recorded.plant;
    const { out } = this.recorded.plant.structure;
    const reached = new Set<number>();
    const queue: number[] = [];
    const visit = (i: number): void => {
      if (reached.has(i) || !(columns.inflow[i] > 0)) return;
      reached.add(i);
      if (columns.part[i] !== Part.Delay) queue.push(i);
    };
    const follow = (i: number): void => {
      for (let e = out.start[i]; e < out.start[i + 1]; e++) {
        if (flow[out.edges[e]] > 0) visit(to[out.edges[e]]);
      }
    };
    if (first) visit(this.entry);
    for (const tube of seeds.keys()) follow(tube);
    for (let i = queue.pop(); i !== undefined; i = queue.pop()) follow(i);
    return new Set([...reached].sort((a, b) => a - b));
  }
}
