import type { Pockets } from "../compartments/block.js";
import { factor, type Lu, solve } from "../numerics/lu.js";
import type { Kinetics, Reactions } from "./kinetics.js";
import { settleMixed } from "./mixed.js";

/**
 * What reaction makes per unit of the way through a body, the whole way counting as 1: in the flow, and in the pockets beside
 * it, whose state follows that of the flow at the same place.
 * @param volume m3 in the flow; `flow` m3/s
 */
export function alongWay(
  reactions: Reactions,
  volume: number,
  pockets: Pockets | undefined,
  flow: number,
  inFlow: Kinetics = reactions.tube,
): Kinetics {
  const tau = volume / flow;
  const n = inFlow.size;
  const beside = pockets && pocketed(reactions.pocket, pockets, flow);
  return {
    size: n,
    thermal: inFlow.thermal,
    endures: inFlow.endures,
    scale: inFlow.scale,
    numbers: inFlow.numbers,
    production(y, at, out, to) {
      inFlow.production(y, at, out, to);
      for (let i = 0; i < n; i++) out[to + i] *= tau;
      beside?.production(y, at, out, to);
    },
    jacobian(y, at, out, to) {
      inFlow.jacobian(y, at, out, to);
      for (let e = 0; e < n * n; e++) out[to + e] *= tau;
      beside?.jacobian(y, at, out, to);
    },
  };
}

type Adds = Pick<Kinetics, "production" | "jacobian">;

/**
 * Adds what pockets give back: q (p - y) per unit of the way over the flow, p the state of a pocket that is fed with y,
 * y - p + (h/q) R(p) = 0. Where that has no solution it adds NaN.
 */
function pocketed(cell: Kinetics, { volume, exchange }: Pockets, flow: number): Adds {
  const n = cell.size;
  const tau = volume / exchange;
  const share = exchange / flow;
  const entering = new Float64Array(n);
  const p = new Float64Array(n);
  const slope = new Float64Array(n * n);
  const column = new Float64Array(n);
  let known = false;
  /** Pockets along a way differ little: each starts from the last. */
  const settle = (y: ArrayLike<number>, at: number): boolean => {
    for (let i = 0; i < n; i++) entering[i] = Math.max(y[at + i], 0);
    if (known && settleMixed(cell, entering, tau, p)) return true;
    p.set(entering);
    known = settleMixed(cell, entering, tau, p);
    return known;
  };
  return {
    production(y, at, out, to) {
      const good = settle(y, at);
      for (let i = 0; i < n; i++) out[to + i] += good ? share * (p[i] - entering[i]) : Number.NaN;
    },
    // dp/dy = (1 - (h/q) R'(p))^-1
    jacobian(y, at, out, to) {
      const good = settle(y, at);
      cell.jacobian(p, 0, slope, 0);
      for (let e = 0; e < n * n; e++) slope[e] *= -tau;
      for (let i = 0; i < n; i++) slope[i * n + i] += 1;
      const lu: Lu | "singular" = good ? factor(slope, n) : "singular";
      for (let j = 0; j < n; j++) {
        if (lu === "singular") column.fill(Number.NaN);
        else {
          column.fill(0);
          column[j] = 1;
          solve(lu, column);
        }
        for (let i = 0; i < n; i++) out[to + i * n + j] += share * (column[i] - (i === j ? 1 : 0));
      }
    },
  };
}
