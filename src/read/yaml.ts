import { type Document, parseDocument } from "yaml";
import type { Report } from "../problems/report.js";
import type { Source } from "../text/source.js";
import { reportGlued } from "./colons.js";
import { largestDocument } from "./files.js";
import { deepest, growTree } from "./grow.js";
import { isText } from "./is-text.js";
import { plainYaml } from "./plain-yaml.js";
import { reportSyntax } from "./syntax.js";
import { mendTraps } from "./traps.js";
import type { MapNode } from "./tree.js";

/** A second's work, and a thousand vessels' worth. */
const mostParts = 50_000;

/**
 * The tree of a YAML 1.2 text, every node with its place; scalars keep their text (a number is a string as typed).
 * @returns undefined where the text is no YAML, or no map; what is wrong is reported, never thrown
 */
export function readYaml(source: Source, report: Report): MapNode | undefined {
  const start = { source, from: 0, to: 0 };
  if (source.text.length > largestDocument) {
    report("file-too-large", start, { bytes: source.text.length });
    return undefined;
  }
  if (!isText(source.text)) {
    report("not-text", { source: { ...source, text: "" }, from: 0, to: 0 }, { file: source.path });
    return undefined;
  }
  if (source.text.length > mostParts && partsIn(source.text) > mostParts) {
    report("too-many-parts", start, { limit: mostParts });
    return undefined;
  }
  const quick = plainYaml(source);
  if (quick) return mendTraps(quick, report);
  const document = parse(source);
  if (document === "too deep") {
    report("too-deep", start, { limit: deepest });
    return undefined;
  }
  if (document.errors.length > 0) {
    reportSyntax(source, document.errors, report);
    return undefined;
  }
  const tree = growTree(source, document, report);
  if (tree === undefined) return undefined;
  if (tree.type !== "map") {
    if (tree.type === "scalar" && tree.empty) report("empty-file", start, {});
    else if (!reportGlued(tree.at, report))
      report("not-a-map", tree.at, { found: tree.type === "list" ? "a list" : "a single value" });
    return undefined;
  }
  return mendTraps(tree, report);
}

/** Failsafe schema: every scalar stays text, and what a number is decides the language, not YAML. */
function parse(source: Source): Document.Parsed | "too deep" {
  try {
    return parseDocument(source.text, { schema: "failsafe", uniqueKeys: false, prettyErrors: false });
  } catch (e) {
    // The parser recurses: what overflows the stack is nested beyond any use.
    if (e instanceof RangeError) return "too deep";
    throw e;
  }
}

/** Signs that begin a key or a value, within texts too, for that is cheaper to tell than what they mean; four lines are worth one. */
function partsIn(text: string): number {
  let parts = 0;
  for (const [sign] of text.matchAll(/[{[,&*!\n]|[:?-](?=\s)/g)) parts += sign === "\n" ? 0.25 : 1;
  return parts;
}
