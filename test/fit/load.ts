import { readFileSync } from "node:fs";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { parseNetwork } from "../../src/parse/network.js";
import type { Parsed, Read } from "../../src/parse/parsed.js";
import { parseTrial } from "../../src/parse/trial.js";

const root = new URL("../../", import.meta.url);
export const textOf = (path: string): string => readFileSync(new URL(path, root), "utf8");

/** A network or trial from its text; whatever is wrong with it is thrown, in its words. */
export const networkOf = (text: string, path = "network.yaml"): Network => wanted(parseNetwork(text, { path }));
export const trialOf = (text: string, read: Read, path = "trial.yaml"): Trial =>
  wanted(parseTrial(text, { path, read }));

export const networkAt = (path: string): Network => networkOf(textOf(path), path);
export const trialAt = (path: string): Trial => trialOf(textOf(path), textOf, path);

function wanted<T>({ document, problems }: Parsed<T>): T {
  if (!document) throw new Error(problems.map((p) => `${p.code}: ${p.message}`).join("\n"));
  return document;
}
