import type { Stays } from "../compartments/stays.js";
import { Part, type Plant } from "../compile/plant.js";
import type { Response } from "./disturbed.js";
import type { Kinetics, Reactions } from "./kinetics.js";
import { parcelSlopes, passTube } from "./tube.js";
import { alongWay } from "./way.js";

/**
 * What a body that is not mixed makes of small disturbances of what enters it, in the state that it has with `mix` entering:
 * tubes exactly, parcels that stay by themselves by sums over their stays.
 * @param mix scaled
 * @returns undefined for cells and joints, for dispersion and beside pockets, and where the way could not be followed
 */
export function responseAt(plant: Plant, node: number, reactions: Reactions, mix: Float64Array): Response | undefined {
  const { part, volume, inflow } = plant.columns;
  const flow = inflow[node];
  if (part[node] === Part.Delay)
    return delayed(alongWay(reactions, volume[node], undefined, flow), volume[node] / flow, mix);
  const block = plant.columns.blockAt(node);
  if (!block || block.pockets) return undefined;
  const along = alongWay(reactions, block.volume, undefined, flow);
  const tau = block.volume / flow;
  if (block.mixing.is === "plug") return delayed(along, tau, mix);
  return block.mixing.is === "segregated" ? shared(along, block.mixing.stays, tau, mix) : undefined;
}

/** Every disturbance keeps its place in the flow: e^(-s tau) times how the outlet leans on the inlet. */
function delayed(along: Kinetics, tau: number, mix: Float64Array): Response | undefined {
  const n = along.size;
  const slope = new Float64Array(n * n);
  if (!passTube(along, 1, mix.slice(), slope)) return undefined;
  return {
    delay: tau,
    write(re, im, outRe, outIm) {
      const size = Math.exp(-re * tau);
      const [c, s] = [size * Math.cos(im * tau), -size * Math.sin(im * tau)];
      for (let e = 0; e < n * n; e++) {
        outRe[e] = c * slope[e];
        outIm[e] = s * slope[e];
      }
    },
  };
}

/** Shares of equal size, by how long they stay. */
const shares = 200;

/** The same for each share of the parcels, at the middle of its stay. */
function shared(along: Kinetics, stays: Stays, tau: number, mix: Float64Array): Response | undefined {
  const n = along.size;
  const at = Float64Array.from({ length: shares }, (_, k) => stayOf(stays, (k + 0.5) / shares));
  const slopes = parcelSlopes(along, at, mix);
  if (!slopes) return undefined;
  return {
    delay: tau,
    lingers: true,
    write(re, im, outRe, outIm) {
      outRe.fill(0);
      outIm.fill(0);
      for (let k = 0; k < shares; k++) {
        const size = Math.exp(-re * tau * at[k]) / shares;
        const [c, s] = [size * Math.cos(im * tau * at[k]), -size * Math.sin(im * tau * at[k])];
        const slope = slopes[k];
        for (let e = 0; e < n * n; e++) {
          outRe[e] += c * slope[e];
          outIm[e] += s * slope[e];
        }
      }
    },
  };
}

/** The stay, in means, that a share of the parcels does not exceed. */
function stayOf({ from, washout, marks }: Stays, share: number): number {
  let [low, high] = [from, marks[marks.length - 1]];
  for (let k = 0; k < 60; k++) {
    const middle = (low + high) / 2;
    if (1 - washout(middle) < share) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
