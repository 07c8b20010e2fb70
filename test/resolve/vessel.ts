import type { Network } from "../../src/model/network.js";
import type { Problem } from "../../src/problems/problem.js";
import { collector } from "../../src/problems/report.js";
import { readYaml } from "../../src/read/yaml.js";
import { resolveNetwork } from "../../src/resolve/network.js";

/** A network resolved and no more: names and values bound, physics not looked at. */
export function resolved(text: string): { network: Network; problems: readonly Problem[]; told: string[] } {
  const { report, problems } = collector();
  const tree = readYaml({ path: "test.yaml", text }, report);
  if (!tree) throw new Error(problems.map((p) => p.message).join("\n"));
  const network = resolveNetwork(tree, "test.yaml", report);
  const told = problems.map((p) => `${p.code} ${p.at.source.text.slice(p.at.from, p.at.to)}`);
  return { network, problems, told };
}

/** One tank of `volume`, under the given declarations. */
export const tank = (declarations: string, volume = "1 L", more = ""): string => `network: A tank
format: 1
${declarations}
feeds:
  feed: {flow: 10 L/min, to: a}
compartments:
  a: {kind: stirred, volume: ${volume}, to: out}
outlets: [out]
${more}`;
