import type { Algebra } from "../numerics/algebra.js";
import { type Complex, complex } from "../numerics/complex.js";
import { dual, dualOf } from "../numerics/dual.js";
import { type Taylor, taylor, variable } from "../numerics/taylor.js";
import type { Pockets } from "./pockets.js";
import { type Realization, realizationAt, type UnitRealization } from "./realization.js";
import type { Stays } from "./stays.js";

export type { Pockets } from "./pockets.js";

/** How a block's liquid mixes on its way, for what its curve alone does not settle: reaction. */
export type Mixing =
  | { readonly is: "plug" }
  /** Between closed ends, whatever the ends are for tracer: reaction is between inlet and outlet only (Wehner & Wilhelm 1956). */
  | { readonly is: "dispersed"; readonly peclet: number }
  /** Entering streams mix; from there every parcel stays by itself to the outlet, its stay shared out as here. */
  | { readonly is: "segregated"; readonly stays: Stays };

/** How a page of equations writes a block: G(s), its through-flow, and its keys by name. */
export interface BlockSymbols {
  readonly transfer: string;
  readonly flow: string;
  readonly key: (name: string) => string;
}

/** What a block's transfer function is made of, or how it moves per unit of t. */
export interface BlockNumbers {
  /** m3 and m3/s; the pockets' are 0 where there are none. */
  readonly volume: number;
  readonly held: number;
  readonly exchange: number;
  /** Dimensionless, in the order of the block's own `shape`: a Péclet number, tanks. */
  readonly shape: readonly number[];
}

/** How what a block does to tracer moves per unit of t. */
export interface BlockSlope {
  /** s, and the share. */
  readonly delay: number;
  readonly direct: number;
  /** Of `spread`. */
  readonly spread: (s: Complex) => Complex;
}

/**
 * A body that no cells, delays and joints spell out. It is known by what it does to tracer that passes at a steady flow
 * (m3/s): its transfer function G(s), s in 1/s, G(0) = 1.
 */
export interface Block {
  /** `transfer` in math, for a reviewer to read. */
  readonly equation: (symbols: BlockSymbols) => string;
  /** For messages: "axial dispersion". */
  readonly is: string;
  readonly mixing: Mixing;
  /** m3, pockets left out. */
  readonly volume: number;
  readonly pockets: Pockets | undefined;
  readonly transfer: (s: Complex, flow: number) => Complex;
  /** s: nothing leaves earlier. A curve is smooth behind it once it is taken out. */
  readonly delay: (flow: number) => number;
  /** G(s) e^(s delay), without the overflow that the product would have. */
  readonly undelayed: (s: Complex, flow: number) => Complex;
  /** What of an instant amount leaves after `delay` all at once: the limit of `undelayed` for large s. */
  readonly direct: (flow: number) => number;
  /** `undelayed` less `direct`, to full relative accuracy. */
  readonly spread: (s: Complex, flow: number) => Complex;
  /** The dimensionless numbers that stand in G beside s V/Q. */
  readonly shape: readonly number[];
  /** The derivative as its numbers and its flow (m3/s) move; undefined where there is none known. */
  readonly slope: (flow: number, moves: BlockNumbers, flowMoves: number) => BlockSlope | undefined;
  /** Coefficients of G in powers of s, orders 0 to 3; infinite from the order on at which the moments are. */
  readonly series: (flow: number) => Taylor;
  /** The same in time, as equations to integrate, at a flow; undefined where there are none. */
  readonly realize: (flow: number) => Realization | undefined;
}

/** Orders of s that moments need: area, mean, variance, third moment. */
export const orders = 4;

interface Body {
  readonly is: string;
  readonly mixing: Mixing;
  readonly volume: number;
  readonly pockets: Pockets | undefined;
  /** `response` in math, in the symbol z. */
  readonly formula: (key: BlockSymbols["key"]) => string;
  /** G of the dimensionless z = s V/Q, one formula for numbers and series. */
  readonly response: <T>(z: T, algebra: Algebra<T>, shape: readonly T[]) => T;
  readonly shape?: readonly number[];
  /** Equations whose transfer function is the response. */
  readonly unit?: () => UnitRealization | undefined;
}

/**
 * A block whose transfer function is a formula in z = s V/Q. Pockets come in through z alone: tracer that stays in them along
 * the way makes z = (s V + s q h / (q + s h)) / Q, h held in them and q exchanged with them.
 * @see K.H. Coats, B.D. Smith, Soc. Petrol. Eng. J. 4 (1964) 73-84 (from memory)
 */
export function formulaBlock({ response, formula, unit, shape = [], ...body }: Body): Block {
  const { volume, pockets } = body;
  const numbers = shape.map(complex.of);
  const gradient = gradientOf(response, volume, pockets, shape);
  const past = volume > 0 || !pockets ? undefined : pastPockets(response, pockets, shape);
  let made: { realization: Realization | undefined } | undefined;
  const transfer = (s: Complex, flow: number): Complex =>
    response(complex.add(complex.scale(s, volume / flow), pocketTime(s, complex, pockets, flow)), complex, numbers);
  return {
    ...body,
    shape,
    equation: ({ transfer: g, flow, key }) =>
      `${g} = ${formula(key)},\\qquad z = ${pockets ? pocketedTime(flow, key) : `s\\, ${key("volume")} / ${flow}`}`,
    transfer,
    delay: () => 0,
    undelayed: transfer,
    direct: () => 0,
    spread: transfer,
    slope: (flow, moves, flowMoves) => formulaSlope(gradient, pockets, flow, moves, flowMoves),
    ...past,
    series: (flow) => {
      const s = variable(orders);
      const z = series.add(series.scale(s, volume / flow), pocketTime(s, series, pockets, flow));
      return response(z, series, shape.map(series.of));
    },
    realize() {
      if (!made && volume > 0 && unit) made = { realization: once(unit, volume, pockets) };
      return made?.realization;
    },
  };
}

function once(unit: () => UnitRealization | undefined, volume: number, pockets: Pockets | undefined) {
  const realized = unit();
  return realized && realizationAt(realized, volume, pockets);
}

/** z in math, with pockets. */
function pocketedTime(flow: string, key: BlockSymbols["key"]): string {
  const [held, exchange] = [key("stagnant.volume"), key("stagnant.exchange")];
  return `\\frac{s}{${flow}}\\left(${key("volume")} + \\frac{${exchange}\\, ${held}}{${exchange} + s\\, ${held}}\\right)`;
}

const series = taylor(orders);

/** dG = G_z dz + the sum of G_shape dshape, of a formula without an undispersed part. */
function formulaSlope(
  gradient: ReturnType<typeof gradientOf>,
  pockets: Pockets | undefined,
  flow: number,
  moves: BlockNumbers,
  flowMoves: number,
): BlockSlope {
  const { add, multiply, scale } = complex;
  return {
    delay: 0,
    direct: 0,
    spread(s) {
      const { z, slopes } = gradient(s, flow);
      let dz = scale(s, moves.volume / flow);
      if (pockets) dz = add(dz, pocketTimeSlope(s, pockets, flow, moves));
      dz = add(dz, scale(z, -flowMoves / flow));
      let sum = multiply(slopes[0], dz);
      for (let j = 0; j < moves.shape.length; j++) sum = add(sum, scale(slopes[1 + j], moves.shape[j]));
      return sum;
    },
  };
}

/** z at a point, and the derivatives of a response by z and by the numbers of its shape; the last is kept, for all directions. */
function gradientOf(
  response: Body["response"],
  volume: number,
  pockets: Pockets | undefined,
  shape: readonly number[],
) {
  const count = 1 + shape.length;
  const algebra = dual(count);
  const numbers = shape.map((x, j) => dualOf(complex.of(x), count, 1 + j));
  let last: { s: Complex; flow: number; z: Complex; slopes: readonly Complex[] } | undefined;
  return (s: Complex, flow: number): { readonly z: Complex; readonly slopes: readonly Complex[] } => {
    if (last?.s === s && last.flow === flow) return last;
    const z = complex.add(complex.scale(s, volume / flow), pocketTime(s, complex, pockets, flow));
    last = { s, flow, z, slopes: response(dualOf(z, count, 0), algebra, numbers).slopes };
    return last;
  };
}

/** d pocketTime as what is held and exchanged moves, the flow left out. */
function pocketTimeSlope(s: Complex, { volume: h, exchange: q }: Pockets, flow: number, moves: BlockNumbers): Complex {
  const { of, add, multiply, divide, scale } = complex;
  const over = divide(of(1), add(of(q), scale(s, h)));
  const square = multiply(over, over);
  const held = scale(square, q * q * moves.held);
  const exchange = multiply(scale(s, h * h * moves.exchange), square);
  return scale(multiply(s, add(held, exchange)), 1 / flow);
}

/** Below this, a difference of two values is told by the slopes instead. */
const close = 1e-4;
/** Orders that tell a slope's difference to round-off. */
const fine = 6;

/**
 * The undispersed part, and the rest, of a response to pockets alone: tracer may pass by all of them. Derivatives are known
 * where no other number stands in the response.
 */
export function pastPockets(
  response: Body["response"],
  { volume, exchange }: Pockets,
  shape: readonly number[] = [],
): Pick<Block, "direct" | "spread" | "slope"> {
  const { of, add, subtract, multiply, divide, scale, size } = complex;
  const numbers = shape.map(of);
  const at = (z: Complex): Complex => response(z, complex, numbers);
  /** most - pocketTime */
  const shortOf = (s: Complex, most: number): Complex =>
    divide(of(most * exchange), add(of(exchange), scale(s, volume)));
  return {
    direct: (flow) => at(of(exchange / flow)).re,
    spread(s, flow) {
      const most = exchange / flow;
      const short = shortOf(s, most);
      if (size(short) > close) return subtract(at(subtract(of(most), short)), at(of(most)));
      const [, first, second, third] = response(
        series.add(series.of(most), variable(orders)),
        series,
        shape.map(series.of),
      );
      const inner = subtract(of(second), scale(short, third));
      return multiply(scale(short, -1), subtract(of(first), multiply(short, inner)));
    },
    slope(flow, moves, flowMoves) {
      if (shape.length > 0) return undefined;
      const most = exchange / flow;
      const mostMoves = moves.exchange / flow - (most * flowMoves) / flow;
      const algebra = taylor(fine);
      const terms = response(algebra.add(algebra.of(most), variable(fine)), algebra, []);
      const toSlope = dual(1);
      const slopeAt = (z: Complex): Complex => response(dualOf(z, 1, 0), toSlope, []).slopes[0];
      const last = terms[1];
      return {
        delay: 0,
        direct: last * mostMoves,
        spread(s) {
          const short = shortOf(s, most);
          // d of exchange^2 / (flow (exchange + s held))
          const over = divide(of(1), add(of(exchange), scale(s, volume)));
          const part =
            moves.exchange === 0 && moves.held === 0
              ? of(0)
              : add(
                  of((2 * moves.exchange) / exchange),
                  multiply(add(of(-moves.exchange), scale(s, -moves.held)), over),
                );
          const shortMoves = multiply(short, add(part, of(-flowMoves / flow)));
          const near = size(short) <= close;
          let apart = of(0); // how far the slope is from that of the undispersed part
          if (near) {
            const back = scale(short, -1);
            for (let k = fine - 1; k >= 2; k--) apart = multiply(back, add(apart, of(k * terms[k])));
          } else apart = subtract(slopeAt(subtract(of(most), short)), of(last));
          return subtract(scale(apart, mostMoves), multiply(add(of(last), apart), shortMoves));
        },
      };
    },
  };
}

/** What pockets add to s V/Q. */
export function pocketTime<T>(s: T, algebra: Algebra<T>, pockets: Pockets | undefined, flow: number): T {
  if (!pockets) return algebra.of(0);
  const { volume: held, exchange } = pockets;
  return algebra.divide(
    algebra.scale(s, (exchange * held) / flow),
    algebra.add(algebra.of(exchange), algebra.scale(s, held)),
  );
}
