import { Part, type Plant } from "../compile/plant.js";
import { type BlockMatrix, block, blockMatrix, solveBlocks } from "./block-matrix.js";
import { bodyAt, hasInside } from "./bodies.js";
import type { Conditions } from "./conditions.js";
import type { Disturbed } from "./disturbed.js";
import type { BlockSystem } from "./newton.js";
import { responseAt } from "./responses.js";

/** One link that ends inside a group: from node `from` of the group, or from outside it (-1). */
interface Inlet {
  readonly from: number;
  readonly share: number;
  /** An exchanger brings one component alone. */
  readonly only?: number;
}

/**
 * The steady balances of nodes that feed one another: per node, in units of its inflow,
 *   cell    mix - y + tau R(y) = 0
 *   body    Phi(mix) - y = 0, Phi the way through it (tubes, and blocks)
 *   joint   mix - y = 0
 * where mix is the flow-weighted mean of what enters. y: outflow of each node, scaled, node by node.
 */
export interface GroupBalance extends BlockSystem {
  /** y without any reaction: a start, from one linear solve. Undefined where the flows admit none. */
  mixed(): Float64Array | undefined;
  /** s, by node: volume over what enters. */
  readonly spaceTime: Float64Array;
  /** s: volume over what enters from outside. */
  readonly meanTime: number;
  /** True where there is nothing but cells and joints. */
  readonly onlyCells: boolean;
  /** How small disturbances of a state go on; undefined where a body does not tell. */
  disturbed(y: Float64Array): Disturbed | undefined;
  /** True where a body solves for what is inside it at every step: dispersion, pockets. */
  readonly slow: boolean;
}

/**
 * @param nodes the nodes of the group, by their index in the plant
 * @param brought scaled concentration times flow that reaches each plant node from outside the group, node by node
 * @param inlets per node of the group, the links from within it as shares of the node's whole inflow
 */
export function groupBalance(
  plant: Plant,
  nodes: Int32Array,
  outside: Float64Array,
  inlets: readonly (readonly Inlet[])[],
  inflow: Float64Array,
  { size: n, reactionsAt }: Pick<Conditions, "size" | "reactionsAt">,
): GroupBalance {
  const count = nodes.length;
  const cells = Array.from(nodes, (node) => reactionsAt(node).cell);
  const { volume, part: parts } = plant.columns;
  const tau = Float64Array.from(nodes, (node, k) => volume[node] / inflow[k]);
  const part = Uint8Array.from(nodes, (node) => parts[node]);
  const bodies = Array.from(nodes, (node) => bodyAt(plant, node, reactionsAt(node)));
  const mix = new Float64Array(n);
  const made = new Float64Array(n);
  const slope = new Float64Array(n * n);

  const enter = (y: Float64Array, k: number): void => {
    for (let i = 0; i < n; i++) mix[i] = outside[k * n + i];
    for (const { from, share, only } of inlets[k]) {
      if (only === undefined) for (let i = 0; i < n; i++) mix[i] += share * y[from * n + i];
      else mix[only] += share * y[from * n + only];
    }
  };

  /** Adds share * scale * through to the block where node k sees node j: through undefined means the identity. */
  const see = (m: BlockMatrix, k: number, through?: Float64Array): void => {
    for (const { from, share, only } of inlets[k]) {
      const b = block(m, k, from);
      if (only !== undefined) {
        for (let i = 0; i < n; i++) b[i * n + only] += share * (through ? through[i * n + only] : i === only ? 1 : 0);
        continue;
      }
      if (through) for (let e = 0; e < n * n; e++) b[e] += share * through[e];
      else for (let i = 0; i < n; i++) b[i * n + i] += share;
    }
  };

  const minusOne = (m: BlockMatrix, k: number): Float64Array => {
    const d = block(m, k, k);
    for (let i = 0; i < n; i++) d[i * n + i] -= 1;
    return d;
  };

  let [held, entering] = [0, 0];
  for (let k = 0; k < count; k++) {
    held += tau[k] * inflow[k];
    entering +=
      inflow[k] * (1 - inlets[k].reduce((sum, { share, only }) => (only === undefined ? sum + share : sum), 0));
  }
  return {
    count,
    size: n,
    spaceTime: tau,
    meanTime: held / entering,
    onlyCells: part.every((p) => p === Part.Cell || p === Part.Joint),
    slow: nodes.some((node) => hasInside(plant, node)),
    memory: tau.map((t, k) => (part[k] === Part.Cell ? t : 0)),
    disturbed(y) {
      const responses: Disturbed["responses"][number][] = [];
      for (let k = 0; k < count; k++) {
        if (!bodies[k]) {
          responses.push(undefined);
          continue;
        }
        enter(y, k);
        const response = responseAt(plant, nodes[k], reactionsAt(nodes[k]), mix);
        if (!response) return undefined;
        responses.push(response);
      }
      const slopes = cells.map((cell, k) => {
        if (part[k] !== Part.Cell) return undefined;
        const own = new Float64Array(n * n);
        cell.jacobian(y, k * n, own, 0);
        return own.map((x) => x * tau[k]);
      });
      return { count, size: n, memory: tau.map((t, k) => (part[k] === Part.Cell ? t : 0)), slopes, responses, inlets };
    },
    residual(y, f) {
      for (let k = 0; k < count; k++) {
        enter(y, k);
        if (bodies[k]?.(mix) === false) return false;
        if (part[k] === Part.Cell) cells[k].production(y, k * n, made, 0);
        const reacting = part[k] === Part.Cell ? tau[k] : 0;
        for (let i = 0; i < n; i++) f[k * n + i] = mix[i] - y[k * n + i] + reacting * made[i];
      }
      return true;
    },
    jacobian(y, m) {
      for (let k = 0; k < count; k++) {
        const body = bodies[k];
        if (body) {
          enter(y, k);
          if (!body(mix, slope)) return false;
          see(m, k, slope);
        } else see(m, k);
        const d = minusOne(m, k);
        if (part[k] !== Part.Cell) continue;
        cells[k].jacobian(y, k * n, slope, 0);
        for (let e = 0; e < n * n; e++) d[e] += tau[k] * slope[e];
      }
      return true;
    },
    mixed() {
      const m = blockMatrix(count, n);
      for (let k = 0; k < count; k++) {
        see(m, k);
        minusOne(m, k);
      }
      const y = outside.map((x) => -x);
      return solveBlocks(m, y) ? y.map((x) => Math.max(x, 0)) : undefined;
    },
  };
}
