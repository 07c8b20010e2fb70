import type { Problem } from "../../src/problems/problem.js";
import { collector } from "../../src/problems/report.js";
import { checkShape, documentKind } from "../../src/read/shape.js";
import type { MapNode, Tree } from "../../src/read/tree.js";
import { readYaml } from "../../src/read/yaml.js";
import type { DocumentKind } from "../../src/schema/shape.js";

export interface Reading {
  readonly tree: MapNode | undefined;
  readonly problems: readonly Problem[];
  /** `code text-at-its-place`, in the order reported. */
  readonly findings: readonly string[];
}

/** The tree of a text, and what is wrong with it as YAML. */
export function read(text: string, path = "test.yaml"): Reading {
  const { report, problems } = collector();
  const tree = readYaml({ path, text }, report);
  return { tree, problems, findings: problems.map(finding) };
}

/** The same with its shape checked; the kind from the document itself where none is given. */
export function check(text: string, kind?: DocumentKind): Reading {
  const { report, problems } = collector();
  const tree = readYaml({ path: "test.yaml", text }, report);
  if (tree) checkShape(tree, kind ?? documentKind(tree) ?? "network", report);
  return { tree, problems, findings: problems.map(finding) };
}

export const finding = ({ code, at }: Problem): string => `${code} ${at.source.text.slice(at.from, at.to)}`.trim();

/** A tree as plain values, for comparing: text for every scalar, null for an empty one. */
export function plain(tree: Tree): unknown {
  if (tree.type === "list") return tree.items.map(plain);
  if (tree.type === "map") return Object.fromEntries(tree.entries.map((e) => [e.key.text, plain(e.value)]));
  return tree.empty ? null : tree.text;
}
