import { evenHyperbolic } from "../numerics/algebra.js";
import { dispersedBody } from "../svg/bodies.js";
import { axialElements } from "./axial-elements.js";
import { formulaBlock } from "./block.js";
import type { CompartmentKind, Ports } from "./kind.js";
import { heldIn, pocketsOf, stagnantKey, withPockets } from "./stagnant.js";

/** Axial dispersion. P.V. Danckwerts, Chem. Eng. Sci. 2 (1953) 1-13; open ends: O. Levenspiel, W.K. Smith, ibid. 6 (1957) 227-233. */
export const dispersed: CompartmentKind = {
  name: "dispersed",
  says: "Flow with axial dispersion: plug flow that also spreads along its way, as diffusion does.",
  keys: {
    volume: {
      shape: { is: "quantity", dimension: "volume" },
      required: true,
      says: "Liquid held in the flow, between inlet and outlet.",
      example: "200 L",
    },
    peclet: {
      shape: { is: "quantity", dimension: "ratio", above: 0 },
      required: true,
      says: "The Péclet number u L / D: velocity times length over dispersion coefficient. Large: nearly plug flow; small: nearly one stirred tank.",
      example: "20",
    },
    ends: {
      shape: { is: "choice", of: ["closed", "open"] },
      says: "`closed`: nothing disperses back through inlet and outlet, as where narrow pipes enter and leave. `open`: the same flow goes on at both ends and tracer may cross them several times; the mean time is then (1 + 2/Pe) times volume over flow, no longer volume over flow.",
      example: "open",
      default: "closed",
    },
    stagnant: stagnantKey,
  },
  flows: true,
  exchanges: false,
  mayExchange: () => false,
  volume: (of) => of.values.volume + heldIn(of),
  spell(maker, of): Ports {
    const { volume, peclet } = of.values;
    const pockets = pocketsOf(of);
    const ends = of.words.ends === "open" ? openEnds : closedEnds;
    const node =
      volume > 0 || pockets
        ? maker.block(
            formulaBlock({
              is: "axial dispersion",
              mixing: { is: "dispersed", peclet },
              volume,
              pockets,
              shape: [peclet],
              unit: () => axialElements(peclet, of.words.ends === "open"),
              ...ends,
            }),
          )
        : maker.joint();
    return { entry: node, exit: node, members: [] };
  },
  picture: (box, of) => withPockets(box, of, (inner) => dispersedBody(inner, of.values.peclet)),
  aspect: () => 4,
};

type Ends = Pick<Parameters<typeof formulaBlock>[0], "formula" | "response">;

const root = (peclet: string): string => `a = \\sqrt{1 + 4 z / ${peclet}}`;

/**
 * G = 4 a e^(Pe/2) / ((1+a)^2 e^(a Pe/2) - (1-a)^2 e^(-a Pe/2)), a = sqrt(1 + 4 z/Pe), written in b = a Pe/2, so that no
 * digits are lost at small Pe and nothing overflows at large.
 * @see Danckwerts (1953); J.F. Wehner, R.H. Wilhelm, Chem. Eng. Sci. 6 (1956) 89-93
 */
const closedEnds: Ends = {
  formula: (key) => {
    const pe = key("peclet");
    return `\\frac{4 a\\, e^{${pe}/2}}{(1 + a)^2 e^{a ${pe}/2} - (1 - a)^2 e^{-a ${pe}/2}},\\qquad ${root(pe)}`;
  },
  response: (z, algebra, [peclet]) => {
    const { of, add, subtract, multiply, divide, scale, exp, sqrt, size } = algebra;
    const half = scale(peclet, 0.5);
    const spread = multiply(peclet, z);
    const squared = add(multiply(half, half), spread);
    const head = add(half, z);
    if (size(squared) < 1) {
      const { cosh, sinhOver } = evenHyperbolic(squared, algebra);
      return divide(exp(half), add(cosh, multiply(head, sinhOver)));
    }
    const b = sqrt(squared);
    const fall = exp(scale(b, -2));
    const forward = exp(divide(scale(spread, -1), add(b, half)));
    const mixed = multiply(head, divide(subtract(of(1), fall), b));
    return divide(scale(forward, 2), add(add(of(1), fall), mixed));
  },
};

/** G = e^((1-a) Pe/2) / a, a = sqrt(1 + 4 z/Pe). Levenspiel & Smith (1957). */
const openEnds: Ends = {
  formula: (key) => {
    const pe = key("peclet");
    return `\\frac{1}{a} e^{(1 - a) ${pe}/2},\\qquad ${root(pe)}`;
  },
  response: (z, { of, add, divide, scale, exp, sqrt }, [peclet]) => {
    const a = sqrt(add(of(1), divide(scale(z, 4), peclet)));
    return divide(exp(divide(scale(z, -2), add(of(1), a))), a);
  },
};
