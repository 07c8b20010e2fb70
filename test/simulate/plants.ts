import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import { parseNetwork } from "../../src/parse/network.js";

/** The compiled plant of a network's text; a problem fails the test. */
export function plantOf(text: string, settings: Record<string, number> = {}): Plant {
  const { document, problems } = parseNetwork(text, { path: "test.yaml" });
  if (!document) throw new Error(problems.map((p) => `${p.code}: ${p.message}`).join("\n"));
  const { plant, problems: more } = compile(document, settings);
  if (!plant) throw new Error(more.map((p) => `${p.code}: ${p.message}`).join("\n"));
  return plant;
}

/** Largest absolute value. */
export const peakOf = (values: ArrayLike<number>): number =>
  Array.from(values).reduce((m, x) => Math.max(m, Math.abs(x)), 0);
