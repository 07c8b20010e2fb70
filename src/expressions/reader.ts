import type { Range } from "./ast.js";
import type { Fault } from "./fault.js";
import type { Token } from "./scan.js";

/** Walks through the pieces of an expression; the last is always the end. */
export class Reader {
  #at = 0;
  depth = 0;
  constructor(readonly tokens: readonly Token[]) {}
  peek(): Token {
    return this.tokens[this.#at];
  }
  next(): Token {
    return this.tokens[this.#at < this.tokens.length - 1 ? this.#at++ : this.#at];
  }
  /** Takes a sign where it comes next. */
  take(...signs: string[]): Extract<Token, { type: "sign" }> | undefined {
    const token = this.peek();
    if (token.type !== "sign" || !signs.includes(token.sign)) return undefined;
    this.next();
    return token;
  }
}

/** A fault of grammar. */
export const broken = (at: Range, why: string, fix: string): Fault => ({
  code: "bad-expression",
  from: at.from,
  to: at.to,
  data: { why, fix },
});
