import { cascadeBody } from "../svg/bodies.js";
import { formulaBlock } from "./block.js";
import { fractionSum } from "./exponential-sums.js";
import type { CompartmentKind, Ports } from "./kind.js";
import type { UnitRealization } from "./realization.js";
import { heldIn, pocketsOf, stagnantKey, withPockets } from "./stagnant.js";
import { gammaStays } from "./stays.js";

/** Gamma-distributed residence times: a real number of tanks. B.A. Buffham, L.G. Gibilaro, AIChE J. 14 (1968) 805-806. */
export const cascade: CompartmentKind = {
  name: "cascade",
  says: "Residence times as of `tanks` equal stirred tanks in series, any real number of them. It describes the curve, not the tanks: for reaction it is segregated (every parcel reacts by itself), so that at an order other than one its conversion is not that of `stirred` with `repeat`. At order 2 and k C0 V/Q = 6.3, three whole tanks as a `cascade` convert 82.40 %, as `stirred, repeat: 3` 79.07 %.",
  keys: {
    volume: {
      shape: { is: "quantity", dimension: "volume" },
      required: true,
      says: "Liquid held in the flow.",
      example: "500 L",
    },
    tanks: {
      shape: { is: "quantity", dimension: "ratio", atLeast: 1 },
      required: true,
      says: "How many tanks in series have this spread of residence times: variance = mean squared over `tanks`. Any real number from 1.",
      example: "3.4",
    },
    stagnant: stagnantKey,
  },
  flows: true,
  exchanges: false,
  mayExchange: () => false,
  volume: (of) => of.values.volume + heldIn(of),
  spell(maker, of): Ports {
    const { volume, tanks } = of.values;
    const pockets = pocketsOf(of);
    const node =
      volume > 0 || pockets
        ? maker.block(
            formulaBlock({
              is: "a cascade",
              mixing: { is: "segregated", stays: gammaStays(tanks) },
              volume,
              pockets,
              formula: (key) => `\\left(1 + z / ${key("tanks")}\\right)^{-${key("tanks")}}`,
              unit: () => tanksInSeries(tanks),
              shape: [tanks],
              response: (z, { exp, log1p, scale, multiply, divide }, [n]) =>
                exp(scale(multiply(n, log1p(divide(z, n))), -1)),
            }),
          )
        : maker.joint();
    return { entry: node, exit: node, members: [] };
  },
  picture: (box, of) => withPockets(box, of, (inner) => cascadeBody(inner, of.values.tanks)),
  aspect: () => 4,
};

/** A fraction of a tank closer to none, or to a whole one, is that. */
const noFraction = 1e-10;

/** Whole tanks one after another, and what is left of a tank as a sum of exponentials. */
function tanksInSeries(tanks: number): UnitRealization {
  const whole = Math.floor(tanks + noFraction);
  const fraction = tanks - whole;
  const rest =
    fraction > noFraction ? fractionSum(fraction) : { rate: new Float64Array(0), weight: new Float64Array(0) };
  const size = whole + rest.rate.length;
  const rates = Array.from({ length: size }, (_, i) => {
    const rate = i < whole ? tanks : tanks * rest.rate[i - whole];
    const row = new Map([[i, -rate]]);
    if (i > 0) row.set(Math.min(i, whole) - 1, rate);
    return row;
  });
  const input = new Float64Array(size);
  input[0] = tanks;
  const output = new Float64Array(size);
  output.set(rest.weight, whole);
  if (size === whole) output[whole - 1] = 1;
  const held = Float64Array.from({ length: size }, (_, i) =>
    i < whole ? 1 / tanks : rest.weight[i - whole] / rest.rate[i - whole] / tanks,
  );
  return { rates, input, output, held, smooths: whole + (size > whole ? 1 : 0) };
}
