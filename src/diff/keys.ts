import type { Expression } from "../expressions/ast.js";
import type { Compartment, Exchange, Network, Stream } from "../model/network.js";
import type { Value } from "../model/value.js";
import { dimensionKey } from "../units/dimension.js";

/** What a name of one document is called where the two are compared; `?` where it has no counterpart. */
export interface Translate {
  place(name: string): string;
  value(name: string): string;
}

/**
 * A text that is equal for expressions that mean the same: units converted, sums and products in any order. Numbers
 * count to 12 digits, so that `1 m3` is `1000 L`.
 */
export function expressionKey(e: Expression, t: Translate): string {
  switch (e.type) {
    case "number":
      return `${numberKey(e.value)}[${dimensionKey(e.unit.dimension)}]`;
    case "name":
      return e.name.endsWith(".flow") ? `${t.place(e.name.slice(0, -5))}.flow` : t.value(e.name);
    case "negate":
      return e.of.type === "number"
        ? expressionKey({ ...e.of, value: -e.of.value }, t)
        : `-(${expressionKey(e.of, t)})`;
    case "call":
      return `${e.name}(${e.args.map((a) => expressionKey(a, t)).join(",")})`;
    case "binary": {
      const { operator } = e;
      if (operator === "+" || operator === "*") return `(${operands(e, operator, t).sort().join(` ${operator} `)})`;
      return `(${expressionKey(e.left, t)} ${operator} ${expressionKey(e.right, t)})`;
    }
  }
}

/** All that a chain of one operator joins. */
function operands(e: Expression, operator: "+" | "*", t: Translate): string[] {
  if (e.type !== "binary" || e.operator !== operator) return [expressionKey(e, t)];
  return [...operands(e.left, operator, t), ...operands(e.right, operator, t)];
}

const numberKey = (x: number): string => String(Number(x.toPrecision(12)) + 0);

/** The same for a value with its `±`. */
export function valueKey(value: Value, env: ArrayLike<number>, t: Translate): string {
  const sd = value.sd?.(env);
  return expressionKey(value.expression, t) + (sd === undefined ? "" : ` ± ${Number(sd.toPrecision(9))}`);
}

/**
 * Where the outflow of a place goes, by destination. One stream that takes all is `all` however it is written; a `rest`
 * beside plain numbers is the number that it comes to.
 */
export function streamKeys(streams: readonly Stream[], env: ArrayLike<number>, t: Translate): Map<string, string> {
  const plain = streams.every(({ split }) => split.is !== "share" || split.value.expression.type === "number");
  const fixed = streams.some(({ split }) => split.is === "flow");
  const shares = streams.reduce((sum, { split }) => sum + (split.is === "share" ? split.value.of(env) : 0), 0);
  return new Map(
    streams.map(({ to, enters, leaves, split }): [string, string] => {
      // How much leaves by an outlet of a zoned body is told by its table.
      if (leaves !== undefined) return [`${whole(t, to, enters)} from ${leaves}`, "its table"];
      const key = (): string => {
        if ("value" in split) {
          const number = split.is === "share" && split.value.expression.type === "number" && !split.value.sd;
          return `${split.is} ${number ? numberKey(split.value.of(env)) : valueKey(split.value, env, t)}`;
        }
        const numeric = plain && !fixed;
        if (split.is === "all" || streams.length === 1) return "share 1";
        return numeric ? `share ${numberKey(1 - shares)}` : "rest";
      };
      return [whole(t, to, enters), key()];
    }),
  );
}

/** The shares of a substance that divides otherwise than the liquid, by destination; none of it is no share. */
export function carriedKeys(streams: readonly Stream[], of: string, env: ArrayLike<number>, t: Translate): string[] {
  return streams.flatMap(({ to, enters, carries }) => {
    const part = carries?.get(of);
    if (part === undefined) return [];
    return [`${whole(t, to, enters)} ${part === "rest" ? part : valueKey(part, env, t)}`];
  });
}

/** A place to the point, where a body has several ways in: `chain.3`. */
const whole = (t: Translate, to: string, enters: string | undefined): string =>
  enters === undefined ? t.place(to) : `${t.place(to)}.${enters}`;

/** Whole numbers and choices of a compartment by their keys. */
export const wordsOf = ({ counts, ...more }: Compartment): Readonly<Record<string, string | number>> => ({
  ...counts,
  ...("words" in more ? (more.words as Readonly<Record<string, string>>) : {}),
});

/** Exchanges of a network by the pair that trades, whichever of the two it is written at. */
export function exchangesOf(network: Network): { pair: readonly [string, string]; exchange: Exchange }[] {
  return network.compartments.flatMap((c) =>
    c.exchanges.map((exchange) => ({ pair: [c.name, exchange.partner] as const, exchange })),
  );
}
