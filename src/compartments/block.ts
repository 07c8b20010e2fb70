import type { Algebra } from "../numerics/algebra.js";
import { type Complex, complex } from "../numerics/complex.js";
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
  readonly response: <T>(z: T, algebra: Algebra<T>) => T;
  /** Equations whose transfer function is the response. */
  readonly unit?: () => UnitRealization | undefined;
}

/**
 * A block whose transfer function is a formula in z = s V/Q. Pockets come in through z alone: tracer that stays in them along
 * the way makes z = (s V + s q h / (q + s h)) / Q, h held in them and q exchanged with them.
 * @see K.H. Coats, B.D. Smith, Soc. Petrol. Eng. J. 4 (1964) 73-84 (from memory)
 */
export function formulaBlock({ response, formula, unit, ...body }: Body): Block {
  const { volume, pockets } = body;
  let made: { realization: Realization | undefined } | undefined;
  const transfer = (s: Complex, flow: number): Complex =>
    response(complex.add(complex.scale(s, volume / flow), pocketTime(s, complex, pockets, flow)), complex);
  return {
    ...body,
    equation: ({ transfer: g, flow, key }) =>
      `${g} = ${formula(key)},\\qquad z = ${pockets ? pocketedTime(flow, key) : `s\\, ${key("volume")} / ${flow}`}`,
    transfer,
    delay: () => 0,
    undelayed: transfer,
    ...(body.volume > 0 || !body.pockets ? { direct: () => 0, spread: transfer } : pastPockets(response, body.pockets)),
    series: (flow) => {
      const s = variable(orders);
      return response(series.add(series.scale(s, volume / flow), pocketTime(s, series, pockets, flow)), series);
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

/** Below this, a difference of two values is told by the slopes instead. */
const close = 1e-4;

/** The undispersed part, and the rest, of a response to pockets alone: tracer may pass by all of them. */
export function pastPockets(
  response: Body["response"],
  { volume, exchange }: Pockets,
): Pick<Block, "direct" | "spread"> {
  const { of, add, subtract, multiply, divide, scale, size } = complex;
  return {
    direct: (flow) => response(of(exchange / flow), complex).re,
    spread(s, flow) {
      const most = exchange / flow;
      const short = divide(of(most * exchange), add(of(exchange), scale(s, volume))); // most - pocketTime
      if (size(short) > close)
        return subtract(response(subtract(of(most), short), complex), response(of(most), complex));
      const [, first, second, third] = response(series.add(series.of(most), variable(orders)), series);
      const inner = subtract(of(second), scale(short, third));
      return multiply(scale(short, -1), subtract(of(first), multiply(short, inner)));
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
