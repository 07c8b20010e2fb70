import { readFileSync } from "node:fs";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { collector } from "../../src/problems/report.js";
import { readYaml } from "../../src/read/yaml.js";
import { resolveNetwork } from "../../src/resolve/network.js";
import { resolveTrial } from "../../src/resolve/trial.js";

const root = new URL("../../", import.meta.url);
export const textOf = (path: string): string => readFileSync(new URL(path, root), "utf8");

/** A network from its text; what is wrong with it is thrown, with its words. */
export function networkOf(text: string, path = "network.yaml"): Network {
  const { report, problems } = collector();
  const tree = readYaml({ path, text }, report);
  const network = tree && resolveNetwork(tree, path, report);
  if (!network || problems.some((p) => p.severity === "error"))
    throw new Error(problems.map((p) => p.message).join("; "));
  return network;
}

/** A trial from its text, with the tables it names. */
export function trialOf(text: string, read: (path: string) => string | undefined, path = "trial.yaml"): Trial {
  const { report, problems } = collector();
  const tree = readYaml({ path, text }, report);
  const trial = tree && resolveTrial(tree, path, { read }, report);
  if (!trial || problems.some((p) => p.severity === "error"))
    throw new Error(problems.map((p) => p.message).join("; "));
  return trial;
}

export const networkAt = (path: string): Network => networkOf(textOf(path), path);
export const trialAt = (path: string): Trial => trialOf(textOf(path), textOf, path);
