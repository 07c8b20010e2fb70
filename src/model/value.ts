import type { Expression } from "../expressions/ast.js";
import type { Scale } from "../expressions/scale.js";
import type { Span } from "../text/source.js";
import type { Dimension } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";

/** Values of all names of a document, SI, one slot per name. */
export type Env = ArrayLike<number>;

/** A written value with its names resolved to slots of an Env. */
export interface Value {
  readonly at: Span;
  readonly dimension: Dimension;
  /** What a temperature is: a point on a scale, or a difference. */
  readonly scale?: Scale;
  /** The unit first written in it, for printing; `one` for a pure number that none went into, undefined where it is made of names alone. */
  readonly unit: Unit | undefined;
  /** For derivatives, and to show how the value came about. */
  readonly expression: Expression;
  /** Every name that it depends on directly. */
  readonly uses: readonly string[];
  /** The number, in SI. */
  of(env: Env): number;
  /** One standard deviation as the file states it, in SI; undefined where none is stated. */
  readonly sd: ((env: Env) => number) | undefined;
  /** Is that a share of the value, so that it grows with it? */
  readonly relative?: true;
  /** Could it not be found? Then it is NaN, and the reason is reported. */
  readonly unknown?: true;
}

/** A quantity ready to print: SI value and the unit that people see. */
export interface Quantity {
  readonly value: number;
  readonly unit: Unit;
}
