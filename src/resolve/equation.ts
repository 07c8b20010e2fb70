import type { Report } from "../problems/report.js";
import type { ScalarNode } from "../read/tree.js";
import { spanWithin } from "./span.js";

/** One species on one side of an equation, with its count. */
export interface Term {
  readonly name: string;
  readonly count: number;
  /** Place of the name in the text of the equation. */
  readonly from: number;
  readonly to: number;
}

export interface Equation {
  readonly left: readonly Term[];
  readonly right: readonly Term[];
  /** Written with `<->`. */
  readonly reversible: boolean;
}

const arrows = /<->|<=>|->|=>|→|⇌|=/g;

/** Reads `A + 2 B -> P` or `A <-> P`. Undefined once its problem is reported. */
export function parseEquation(node: ScalarNode, report: Report): Equation | undefined {
  const { text } = node;
  const fail = (from: number, to: number, why: string, fix: string): undefined => {
    report("bad-equation", spanWithin(node, from, to), { text, why, fix });
    return undefined;
  };
  const found = [...text.matchAll(arrows)];
  if (found.length !== 1) {
    const why = found.length === 0 ? "it has no arrow" : "it has more than one arrow";
    return fail(0, text.length, why, "write one arrow, such as A + B -> P, or A <-> P where it goes both ways");
  }
  const [arrow] = found;
  if (arrow[0] !== "->" && arrow[0] !== "<->") {
    const meant = /[<⇌]/.test(arrow[0]) ? "<->" : "->";
    return fail(arrow.index, arrow.index + arrow[0].length, `'${arrow[0]}' is not its arrow`, `write \`${meant}\``);
  }
  const left = side(text.slice(0, arrow.index), 0, fail);
  const right = left && side(text.slice(arrow.index + arrow[0].length), arrow.index + arrow[0].length, fail);
  return left && right && { left, right, reversible: arrow[0] === "<->" };
}

type Fail = (from: number, to: number, why: string, fix: string) => undefined;

function side(text: string, shift: number, fail: Fail): Term[] | undefined {
  const terms: Term[] = [];
  let start = 0;
  for (const part of text.split("+")) {
    const from = shift + start + part.length - part.trimStart().length;
    const to = from + part.trim().length;
    start += part.length + 1;
    if (part.trim() === "") {
      const fix =
        "name a species there; where nothing that counts is made, write `makes: {A: -1}` in place of `equation:`";
      return fail(0, shift + text.length, "a side or a term is empty", fix);
    }
    const match = /^(?:(\S+)\s+)?([A-Za-z][A-Za-z0-9_-]*)$/.exec(part.trim());
    if (!match) return fail(from, to, `'${part.trim()}' is not a species`, example(part.trim()));
    const count = match[1] === undefined ? 1 : Number(match[1]);
    if (match[1] !== undefined && !/^\d+$/.test(match[1])) {
      const fix = "write whole numbers, or `makes: {A: -1, P: 0.5}` in place of `equation:`";
      return fail(from, from + match[1].length, `'${match[1]}' is not a whole number`, fix);
    }
    terms.push({ name: match[2], count, from: to - match[2].length, to });
  }
  return terms;
}

/** `2B` is most likely `2 B`. */
function example(text: string): string {
  const stuck = /^(\d+)\*?\s*([A-Za-z][A-Za-z0-9_-]*)$/.exec(text);
  return stuck ? `write \`${stuck[1]} ${stuck[2]}\`` : "write terms such as `2 B`, joined by ` + `";
}
