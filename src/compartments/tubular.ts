import type { Algebra } from "../numerics/algebra.js";
import { complex } from "../numerics/complex.js";
import { tubularBody } from "../svg/bodies.js";
import { type Block, formulaBlock, type Pockets, pastPockets, pocketTime } from "./block.js";
import type { CompartmentKind, Ports } from "./kind.js";
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
    ...pastPockets(response, pockets),
  };
}
