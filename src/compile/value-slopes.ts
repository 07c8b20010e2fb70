import type { Expression } from "../expressions/ast.js";
import { type Compiled, compileExpression } from "../expressions/compile.js";
import { differentiate } from "../expressions/differentiate.js";
import type { Named, Network } from "../model/network.js";
import type { Env, Value } from "../model/value.js";

/** One partial derivative of a value. */
interface Partial {
  readonly slot: number;
  readonly slope: Compiled;
}

/** Derivatives of the values of a network along directions in which its names move. Those of each value are derived once. */
export class ValueSlopes {
  private readonly slots: ReadonlyMap<string, number>;
  private readonly named: readonly Named[];
  private readonly partials = new Map<Expression, readonly Partial[]>();

  constructor(network: Network) {
    this.slots = new Map(network.names.map((n) => [n.name, n.slot]));
    const bySlot = new Map(network.names.map((n) => [n.slot, n]));
    this.named = network.order.flatMap((slot) => bySlot.get(slot) ?? []);
  }

  /** d value / dt, SI, where the names move along `slope` (SI per unit of t, one slot each). */
  along(value: Value, env: Env, slope: Float64Array): number {
    let sum = 0;
    for (const { slot, slope: partial } of this.partialsOf(value)) {
      if (slope[slot] !== 0) sum += partial(env) * slope[slot];
    }
    return sum;
  }

  /**
   * How all names move: SI per unit of t, one slot each.
   * @param isSet  names that are set: they do not follow what their values say
   * @param moved  what moves by itself: by name, SI per unit of t, on top of what a value follows
   */
  names(env: Float64Array, isSet: (name: string) => boolean, moved: ReadonlyMap<string, number>): Float64Array {
    const slope = new Float64Array(env.length);
    for (const { name, slot, role, value } of this.named) {
      const own = (): number => (role === "inflow" ? differenced(value, env, slope) : this.along(value, env, slope));
      slope[slot] = (isSet(name) ? 0 : own()) + (moved.get(name) ?? 0);
    }
    return slope;
  }

  private partialsOf(value: Value): readonly Partial[] {
    const known = this.partials.get(value.expression);
    if (known) return known;
    const slotOf = (name: string): number | undefined => this.slots.get(name);
    const made = value.uses.flatMap((name): Partial[] => {
      const slot = slotOf(name);
      const slope = differentiate(value.expression, name);
      if (slot === undefined || (slope.type === "number" && slope.value === 0)) return [];
      return [{ slot, slope: compileExpression(slope, slotOf) }];
    });
    this.partials.set(value.expression, made);
    return made;
  }
}

/**
 * What streams bring to a part is a value without an expression: sums of products and quotients of other values, for which
 * seven-point differences are good to about 1e-12.
 */
function differenced(value: Value, env: Float64Array, slope: Float64Array): number {
  let h = Number.POSITIVE_INFINITY;
  for (let i = 0; i < env.length; i++) if (slope[i] !== 0) h = Math.min(h, Math.abs((env[i] || 1) / slope[i]) / 64);
  if (!Number.isFinite(h)) return 0;
  const at = (k: number): number => value.of(env.map((x, i) => x + k * h * slope[i]));
  return sevenPoint(at, h);
}

/** Derivative by differences of the sixth order: f at -3h, ..., 3h. */
export const sevenPoint = (at: (k: number) => number, h: number): number =>
  (45 * (at(1) - at(-1)) - 9 * (at(2) - at(-2)) + (at(3) - at(-3))) / (60 * h);
