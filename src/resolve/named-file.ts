import type { Report } from "../problems/report.js";
import { type Files, isInside } from "../read/files.js";
import { openText } from "../read/open.js";
import { beside } from "../read/paths.js";
import type { MapNode, ScalarNode } from "../read/tree.js";
import { readYaml } from "../read/yaml.js";
import { type Source, type Use, usesOf } from "../text/source.js";

/** Files may lead to files so many times. Links to folders could otherwise go on for ever without a circle of paths. */
const deepest = 50;

/**
 * The tree of a document that another one names as a part or a base. Its path is relative to the file in which it is
 * named; its source remembers that place.
 * @returns undefined where there is no such document, or none that may be used here; reported
 */
export function openNamed(node: ScalarNode, as: Use["as"], files: Files, report: Report): MapNode | undefined {
  const file = beside(node.at.source.path, node.text);
  const circle = circleTo(file, node.at.source, files);
  if (circle) report("circular-use", node.at, { circle });
  else if (usesOf(node.at.source).length >= deepest) report("use-too-deep", node.at, { limit: deepest });
  else if (!isInside(files, file)) report("outside-library", node.at, { file: node.text, root: files.root ?? "." });
  else {
    const text = openText(file, node, files, report);
    return text === undefined ? undefined : readYaml({ path: file, text, usedBy: { as, at: node.at } }, report);
  }
  return undefined;
}

/** The files from one to itself again, where naming it here closes a circle. */
function circleTo(file: string, from: Source, { real = (path) => path }: Files): string[] | undefined {
  const paths = [from.path, ...usesOf(from).map((use) => use.at.source.path)];
  const end = paths.findIndex((path) => real(path) === real(file));
  return end < 0 ? undefined : [...paths.slice(0, end + 1).reverse(), file];
}
