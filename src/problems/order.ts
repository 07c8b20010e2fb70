import type { Problem } from "./problem.js";

/** Problems as a reader meets them: files in the order first spoken of, each from top to bottom. */
export function inFileOrder(problems: readonly Problem[]): Problem[] {
  const files = new Map<string, number>();
  for (const { at } of problems) if (!files.has(at.source.path)) files.set(at.source.path, files.size);
  const rank = ({ at }: Problem): number => files.get(at.source.path) ?? 0;
  return [...problems].sort((a, b) => rank(a) - rank(b) || a.at.from - b.at.from);
}
