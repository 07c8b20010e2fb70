import { type Complex, complex } from "../numerics/complex.js";
import { scaledExpint, scaledExpintSlope } from "../numerics/expint.js";
import { laminarBody } from "../svg/bodies.js";
import type { Block } from "./block.js";
import { laminarSum } from "./exponential-sums.js";
import type { CompartmentKind, Ports } from "./kind.js";
import { realizationAt, type UnitRealization } from "./realization.js";
import { laminarStays } from "./stays.js";

/** Laminar flow in a round tube. R.C.L. Bosworth, Phil. Mag. 39 (1948) 847-862; Danckwerts, Chem. Eng. Sci. 2 (1953) 1-13. */
export const laminar: CompartmentKind = {
  name: "laminar",
  says: "Laminar flow in a round tube without diffusion: the middle is twice as fast as the mean, the wall stands still, and no layer mixes with another. The mean time is volume over flow; the variance has no end.",
  keys: {
    volume: {
      shape: { is: "quantity", dimension: "volume" },
      required: true,
      says: "Liquid held.",
      example: "50 L",
    },
  },
  flows: true,
  exchanges: false,
  mayExchange: () => false,
  volume: ({ values }) => values.volume,
  spell(maker, { values }): Ports {
    const node = values.volume > 0 ? maker.block(laminarTube(values.volume)) : maker.joint();
    return { entry: node, exit: node, members: [] };
  },
  picture: (box) => laminarBody(box),
  aspect: () => 4,
};

/** G = 2 E3(s tau/2): nothing leaves before tau/2, then E = tau^2 / (2 t^3). */
function laminarTube(volume: number): Block {
  // The last point is kept: its value serves the derivative, which serves all directions.
  let last: { s: Complex; flow: number; x: Complex; value: Complex; slope?: Complex } | undefined;
  const at = (s: Complex, flow: number) => {
    if (last?.s === s && last.flow === flow) return last;
    const x = complex.scale(s, volume / flow / 2);
    last = { s, flow, x, value: scaledExpint(3, x) };
    return last;
  };
  const undelayed = (s: Complex, flow: number): Complex => complex.scale(at(s, flow).value, 2);
  return {
    is: "laminar flow",
    mixing: { is: "segregated", stays: laminarStays },
    volume,
    pockets: undefined,
    equation: ({ transfer, flow, key }) =>
      `${transfer} = 2 E_3(z / 2),\\qquad E_3(x) = \\int_1^\\infty \\frac{e^{-x u}}{u^3}\\,du,\\qquad z = s\\, ${key("volume")} / ${flow}`,
    delay: (flow) => volume / flow / 2,
    undelayed,
    direct: () => 0,
    spread: undelayed,
    shape: [],
    slope(flow, moves, flowMoves) {
      const moved = (moves.volume - (volume / flow) * flowMoves) / flow / 2;
      return {
        delay: moved,
        direct: 0,
        spread(s) {
          const point = at(s, flow);
          point.slope ??= scaledExpintSlope(3, point.x, point.value);
          return complex.scale(complex.multiply(s, point.slope), 2 * moved);
        },
      };
    },
    transfer: (s, flow) => complex.multiply(complex.exp(complex.scale(s, -volume / flow / 2)), undelayed(s, flow)),
    realize: () => realizationAt(layers(), volume, undefined),
    series: (flow) => Float64Array.of(1, -volume / flow, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY),
  };
}

/** Half a volume of delay, then tanks side by side. */
function layers(): UnitRealization {
  const { rate, weight } = laminarSum();
  return {
    delay: 0.5,
    rates: Array.from(rate, (r, i) => new Map([[i, -2 * r]])),
    input: rate.map((r) => 2 * r),
    output: weight,
    held: weight.map((w, i) => w / (2 * rate[i])),
    smooths: 1,
  };
}
