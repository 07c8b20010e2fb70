import type { Block } from "../compartments/block.js";
import { Part, type Plant, type PlantNode } from "../compile/plant.js";
import type { PlantSlope } from "../compile/plant-slopes.js";
import { type Complex, complex } from "../numerics/complex.js";
import { gain } from "../transfer/gain.js";

/** A node as the inversion needs it: what passes at once, what spreads, and how late. */
export interface Passing {
  /** s; 0 where nothing is delayed. */
  readonly delay: number;
  /** Share of an instant amount that leaves undispersed. */
  readonly direct: number;
  /** The undelayed gain without its undispersed part. */
  spread(s: Complex): Complex;
  /** The whole gain, delay and all. */
  whole(s: Complex): Complex;
}

/** A tube shorter than this part of the mean time is a junction. */
const shortest = 1e-9;
const none = complex.of(0);

/** @param meanTime s, of the plant */
export function passings(plant: Plant, meanTime: number): Passing[] {
  return plant.nodes.map((node) => passing(node, shortest * meanTime));
}

function passing(node: PlantNode, shortestDelay: number): Passing {
  const { part, volume, inflow, block } = node;
  const whole = (s: Complex): Complex => gain(node, s);
  const nothing = { delay: 0, direct: 0, spread: () => none, whole: () => none };
  if (!(inflow > 0)) return nothing;
  switch (part) {
    case Part.Cell:
      return { delay: 0, direct: 0, spread: whole, whole };
    case Part.Joint:
      return { delay: 0, direct: 1, spread: () => none, whole };
    case Part.Delay: {
      const delay = volume / inflow;
      if (delay < shortestDelay) return { delay: 0, direct: 1, spread: () => none, whole: () => complex.of(1) };
      return { delay, direct: 1, spread: () => none, whole };
    }
    case Part.Block:
      return blockPassing(block as Block, inflow, shortestDelay);
  }
}

function blockPassing(block: Block, inflow: number, shortestDelay: number): Passing {
  const delay = block.delay(inflow);
  const late = delay >= shortestDelay;
  return {
    delay: late ? delay : 0,
    direct: block.direct(inflow),
    spread: (s) => block.spread(s, inflow),
    whole: (s) => (late ? block.transfer(s, inflow) : block.undelayed(s, inflow)),
  };
}

/** How a `Passing` moves per unit of t. */
export interface PassingSlope {
  /** s */
  readonly delay: number;
  readonly direct: number;
  /** Undefined: not at all. */
  readonly spread: ((s: Complex) => Complex) | undefined;
}

const still: PassingSlope = { delay: 0, direct: 0, spread: undefined };

/** The derivatives of `passings` along a direction; undefined where a body has none. */
export function passingSlopes(
  plant: Plant,
  passing: readonly Passing[],
  moves: PlantSlope,
): PassingSlope[] | undefined {
  const slopes: PassingSlope[] = [];
  for (const [i, { part, volume, inflow, block }] of plant.nodes.entries()) {
    const flowMoves = moves.inflow[i];
    if (!(inflow > 0)) {
      slopes.push(still);
      continue;
    }
    const tau = (moves.volume[i] - (volume / inflow) * flowMoves) / inflow;
    if (part === Part.Cell && tau !== 0) slopes.push({ ...still, spread: cellSlope(volume / inflow, tau) });
    else if (part === Part.Delay) slopes.push(passing[i].delay > 0 ? { ...still, delay: tau } : still);
    else if (part === Part.Block) {
      const numbers = moves.blocks.get(i);
      const slope = numbers && block?.slope(inflow, numbers, flowMoves);
      if (!numbers || !slope) return undefined;
      const { volume: v, held, exchange, shape } = numbers;
      const moved = [v, held, exchange, flowMoves, ...shape].some((x) => x !== 0);
      slopes.push(moved ? { ...slope, delay: passing[i].delay > 0 ? slope.delay : 0 } : still);
    } else slopes.push(still);
  }
  return slopes;
}

/** d/dt of 1 / (1 + s tau). */
const cellSlope =
  (tau: number, moves: number) =>
  (s: Complex): Complex => {
    const g = complex.divide(complex.of(1), { re: 1 + s.re * tau, im: s.im * tau });
    return complex.multiply(complex.scale(s, -moves), complex.multiply(g, g));
  };
