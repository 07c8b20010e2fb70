import type { Requirement } from "../model/network.js";
import type { Report } from "../problems/report.js";
import { itemsOf, type ScalarNode, type Tree } from "../read/tree.js";
import { resolveValue, type Scope } from "./value.js";

/** `requires:` lines: two expressions of one dimension with < <= > >= between them. */
export function resolveRequirements(
  node: Tree | undefined,
  scope: Scope,
  report: Report,
): { requires: Requirement[]; requireNames: string[] } {
  const requireNames: string[] = [];
  const requires = itemsOf(node).flatMap((item): Requirement[] => {
    if (item.type !== "scalar") return [];
    const sides = /^(.*?)\s*(<=|>=|<|>)\s*(.*)$/s.exec(item.text);
    if (!sides || /[<>=]/.test(sides[3]) || !sides[1] || !sides[3]) {
      report("bad-requirement", item.at, { text: item.text });
      return [];
    }
    const [, leftText, sign, rightText] = sides;
    const left = resolveValue(part(item, 0, leftText), "any", scope, report);
    const right =
      left && resolveValue(part(item, item.text.length - rightText.length, rightText), left.dimension, scope, report);
    if (!left || !right) return [];
    requireNames.push(...left.uses, ...right.uses);
    const turn = sign.startsWith("<") ? 1 : -1;
    // Where the sides may be equal, equal sides must show as positive.
    const atLeast = sign.endsWith("=") ? Number.MIN_VALUE : 0;
    const slack = (env: ArrayLike<number>): number => turn * (right.of(env) - left.of(env)) || atLeast;
    return [{ text: item.text, at: item.at, left, right, slack }];
  });
  return { requires, requireNames };
}

/** A stretch of a scalar as a scalar of its own, so that places stay exact. */
export function part(node: ScalarNode, from: number, text: string): ScalarNode {
  const shift = node.at.from + (node.plain ? 0 : 1) + from;
  return { ...node, plain: true, text, at: { source: node.at.source, from: shift, to: shift + text.length } };
}
