import { Part, type Plant } from "../compile/plant.js";
import type { Drive, Passage, Query, TracerEngine } from "./linear-system.js";
import { driveAt, sameTime, since } from "./linear-system.js";
import type { Unrolled } from "./unroll.js";

/** Sums of passages at clock times: concentration (per unit of amount), its integral from 0. */
export interface Seen {
  readonly value: Float64Array;
  readonly integral: Float64Array;
}

/** What to look at: passages at clock times, s, ascending. */
export interface Look {
  readonly passages: readonly Passage[];
  readonly times: Float64Array;
  /** Default true; false leaves `integral` at 0. */
  readonly integral?: boolean;
}

/** Runs an engine once for several looks. */
export function see(
  unrolled: Unrolled,
  drive: Drive,
  looks: readonly Look[],
  engine: TracerEngine,
): { seen: Seen[]; stopped: string | undefined } {
  const queries: Query[] = [];
  for (const look of looks) {
    for (const p of look.passages)
      queries.push({ signal: p, times: look.times.map((t) => since(t, p.delay)), integral: look.integral ?? true });
  }
  const { answers, stopped } = engine.run(unrolled.system(), drive, queries);
  let q = 0;
  const seen = looks.map((look): Seen => {
    const value = new Float64Array(look.times.length);
    const integral = new Float64Array(look.times.length);
    for (let p = 0; p < look.passages.length; p++, q++) {
      const a = answers[q];
      for (let i = 0; i < value.length; i++) {
        value[i] += a.value[i];
        integral[i] += a.integral[i];
      }
    }
    return { value, integral };
  });
  return { seen, stopped };
}

/** Where all tracer is at a time: put in, gone out, still inside; in the unit of the amount. */
export interface Balance {
  readonly injected: number;
  readonly left: number;
  readonly inside: number;
  readonly recovered: number;
  /** |injected - left - inside| / injected. */
  readonly closure: number;
}

/** The tracer balance at clock time `ends`; `inside` from what cells and tubes hold, not from a difference. */
export function balanceAt(plant: Plant, unrolled: Unrolled, drive: Drive, ends: number, engine: TracerEngine): Balance {
  // A little later, so that what leaves a tube at that very time is nowhere counted twice for rounding.
  const until = ends * (1 + sameTime);
  const looks: Look[] = [];
  const weigh: ((s: Seen) => number)[] = [];
  let left = 0;
  let inside = 0;
  for (const o of plant.outlets) {
    looks.push({ passages: unrolled.outflow(o.node), times: Float64Array.of(until) });
    weigh.push((s) => {
      left += o.flow * s.integral[0];
      return 0;
    });
  }
  plant.nodes.forEach((node, i) => {
    if (node.part === Part.Cell) {
      looks.push({ passages: unrolled.outflow(i), times: Float64Array.of(until) });
      weigh.push((s) => node.volume * s.value[0]);
    } else if (node.part === Part.Delay && node.inflow > 0) {
      const delay = node.volume / node.inflow;
      looks.push({ passages: unrolled.inlet(i), times: Float64Array.of(until - delay, until) });
      weigh.push((s) => node.inflow * (s.integral[1] - s.integral[0]));
    }
  });
  const { seen } = see(unrolled, drive, looks, engine);
  seen.forEach((s, i) => {
    inside += weigh[i](s);
  });
  const put = driveAt(drive, until).total;
  const recovered = left + inside;
  const closure = put > 0 ? Math.abs(put - recovered) / put : 0;
  return { injected: driveAt(drive, ends).total, left, inside, recovered, closure };
}
