import { checkNetwork } from "../check/check.js";
import { compile } from "../compile/compile.js";
import { evaluateNames } from "../compile/evaluate.js";
import type { Plant } from "../compile/plant.js";
import type { Network } from "../model/network.js";
import type { Problem } from "../problems/problem.js";
import { collector, hasErrors } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { type MapNode, textOf } from "../read/tree.js";
import { resolveNetwork } from "../resolve/network.js";
import { cornerWarnings } from "./corners.js";
import { fastExchanges } from "./fast-exchanges.js";
import { filesOf, type Meaning, type Parsed, type ParseOptions, parseDocument, type Reading } from "./parsed.js";

/** A network with the tree that it came from, which a study's changes are merged into. */
export interface NetworkDocument extends Network {
  readonly tree: MapNode;
  /** How it reached the files that it names. */
  readonly files: Files;
  /** Balanced at the file's own values. */
  readonly start: Plant;
}

/**
 * Reads, resolves and checks a network, and balances it once at its start values.
 * @returns every problem of the file at once; no document where one is an error. Never throws on bad input.
 */
export function parseNetwork(text: string | Reading, options: ParseOptions = {}): Parsed<NetworkDocument> {
  const path = options.path ?? "network.yaml";
  const meaning: Meaning<NetworkDocument> = (tree, report, adopt) => {
    const change = tree.entries.find(({ key }) => key.text === "change");
    if (change) {
      report("change-only", change.key.at, { title: textOf(tree, "network") ?? "" });
      return undefined;
    }
    const { network, problems } = networkFromTree(tree, path, filesOf(path, options));
    adopt(problems);
    return network;
  };
  return parseDocument("network", text, { ...options, path }, meaning, (tree, report) => {
    resolveNetwork(tree, path, report, filesOf(path, options));
  });
}

/** The same from a tree whose shape is right (a merged variant). */
export function networkFromTree(
  tree: MapNode,
  path: string,
  files: Files,
): { network: NetworkDocument | undefined; problems: Problem[] } {
  const { report, problems } = collector();
  const network = resolveNetwork(tree, path, report, files);
  if (hasErrors(problems)) return { network: undefined, problems };
  checkNetwork(network, evaluateNames(network), report);
  if (hasErrors(problems)) return { network: undefined, problems };
  const { plant, problems: impossible } = compile(network);
  problems.push(...impossible);
  if (!plant || hasErrors(problems)) return { network: undefined, problems };
  fastExchanges(plant, report);
  cornerWarnings(network, report);
  return { network: { ...network, tree, files, start: plant }, problems };
}
