import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import { type NetworkDocument, parseNetwork } from "../../src/parse/network.js";
import { printProblems } from "../../src/problems/print.js";
import type { Problem } from "../../src/problems/problem.js";

/** Files by path; `main.yaml` is the one that is read, unless another is named. */
export type Library = Readonly<Record<string, string>>;

export const parse = (library: Library, path = "main.yaml") =>
  parseNetwork(library[path], { path, read: (file) => library[file] });

/** The network; a problem fails the test. */
export function networkOf(library: Library, path?: string): NetworkDocument {
  const { document, problems } = parse(library, path);
  if (!document) throw new Error(printProblems(problems));
  return document;
}

export function plantOf(library: Library, settings: Record<string, number> = {}): Plant {
  const { plant, problems } = compile(networkOf(library), settings);
  if (!plant) throw new Error(printProblems(problems));
  return plant;
}

/** "code name-at-the-place" of each problem. */
export const codes = (problems: readonly Problem[]): string[] =>
  problems.map((p) => `${p.code} ${p.at.source.path} ${p.at.source.text.slice(p.at.from, p.at.to).split("\n")[0]}`);

/** A network document around the given lines. */
export const network = (lines: string, title = "Test") => `network: ${title}\nformat: 1\n${lines}\n`;
