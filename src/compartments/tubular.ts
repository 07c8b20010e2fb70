import type { Algebra } from "../numerics/algebra.js";
import { complex } from "../numerics/complex.js";
import { sparseRows } from "../numerics/sparse.js";
import { tubularBody } from "../svg/bodies.js";
import { type Block, formulaBlock, type Pockets, pastPockets, pocketTime } from "./block.js";
import type { CompartmentKind, Ports } from "./kind.js";
import type { Realization } from "./realization.js";
import { heldIn, pocketsOf, stagnantKey, withPockets } from "./stagnant.js";

/** Ideal plug flow: a true transport delay V/Q, never smeared. Danckwerts, Chem. Eng. Sci. 2 (1953) 1-13. */
export const tubular: CompartmentKind = {
  name: "tubular",
  says: "Ideal plug flow: everything that enters leaves unchanged in shape one space time later.",
  keys: {
    volume: {
      shape: { is: "quantity", dimension: "volume" },
      required: true,
      says: "Liquid held in the flow.",
      example: "150 L",
    },
    stagnant: stagnantKey,
  },
  flows: true,
  exchanges: false,
  mayExchange: () => false,
  volume: (of) => of.values.volume + heldIn(of),
  spell(maker, of): Ports {
    const { volume } = of.values;
    const pockets = pocketsOf(of);
    const node = pockets
      ? maker.block(pocketedTube(volume, pockets))
      : volume > 0
        ? maker.delay(volume)
        : maker.joint();
    return { entry: node, exit: node, members: [] };
  },
  picture: (box, of) => withPockets(box, of, tubularBody),
  aspect: () => 4,
};

/** Plug flow past pockets: a delay V/Q, and behind it what the pockets held back. */
function pocketedTube(volume: number, pockets: Pockets): Block {
  const response = <T>(z: T, { exp, scale }: Algebra<T>): T => exp(scale(z, -1));
  const past = pastPockets(response, pockets);
  return {
    ...formulaBlock({
      is: "plug flow past stagnant pockets",
      mixing: { is: "plug" },
      volume,
      pockets,
      formula: () => "e^{-z}",
      response,
    }),
    delay: (flow) => volume / flow,
    undelayed: (s, flow) => response(pocketTime(s, complex, pockets, flow), complex),
    ...past,
    slope(flow, moves, flowMoves) {
      const slope = past.slope(flow, moves, flowMoves);
      return slope && { ...slope, delay: (moves.volume - (volume / flow) * flowMoves) / flow };
    },
    realize: (flow) => visits(volume, pockets, flow),
  };
}

/** More visits to pockets than these are not followed one by one. */
const mostVisits = 20_000;

/**
 * On its way a parcel visits pockets k times with the chance of Poisson's law, mean exchange / flow, and stays as long as in k
 * tanks in series: a chain of tanks, the outflow a blend of all of them. At one flow only: the visits of a parcel in a flow
 * that varies depend on all of it.
 */
function visits(volume: number, { volume: held, exchange }: Pockets, flow: number): Realization | undefined {
  const mean = exchange / flow;
  const size = Math.ceil(mean + 9 * Math.sqrt(mean) + 20);
  if (!(volume > 0) || size > mostVisits) return undefined;
  const rate = exchange / held;
  const chance = new Float64Array(size + 1);
  let log = -mean;
  for (let k = 0; k <= size; k++) {
    if (k > 0) log += Math.log(mean / k);
    chance[k] = Math.exp(log);
  }
  let more = 0; // chance of at least k visits
  const waiting = new Float64Array(size);
  for (let k = size; k > 0; k--) {
    more += chance[k];
    waiting[k - 1] = (more * flow) / rate;
  }
  const output = chance.slice(1);
  output[size - 1] += 1 - chance[0] - more;
  const input = new Float64Array(size);
  input[0] = rate / flow;
  return {
    delay: volume,
    through: sparseRows(Array.from({ length: size }, () => new Map())),
    still: sparseRows(
      Array.from({ length: size }, (_, k) => {
        const row = new Map([[k, -rate]]);
        if (k > 0) row.set(k - 1, rate);
        return row;
      }),
    ),
    input,
    output,
    direct: chance[0],
    held: waiting,
    smooths: 1,
    steadyOnly: true,
  };
}
