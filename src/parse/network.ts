import { checkNetwork } from "../check/check.js";
import { unknownKind } from "../compartments/unknown.js";
import { compile, impossible } from "../compile/compile.js";
import { evaluateNames } from "../compile/evaluate.js";
import type { Plant } from "../compile/plant.js";
import type { Network } from "../model/network.js";
import type { Problem } from "../problems/problem.js";
import { collector, hasErrors } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, type MapNode, textOf } from "../read/tree.js";
import { resolveNetwork } from "../resolve/network.js";
import type { Span } from "../text/source.js";
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
  return parseDocument("network", text, { ...options, path }, meaning, (tree, told) => {
    const found = resolved(tree, path, filesOf(path, options));
    // A variant that is none says too little by itself.
    const variant = child(tree, "based-on") || child(tree, "change");
    return variant ? found.problems : withoutEchoes(problemsOf(found, told), tree, told);
  });
}

/** The same from a tree whose shape is right (a merged variant). */
export function networkFromTree(
  tree: MapNode,
  path: string,
  files: Files,
): { network: NetworkDocument | undefined; problems: Problem[] } {
  const found = resolved(tree, path, files);
  const problems = problemsOf(found);
  if (hasErrors(problems)) return { network: undefined, problems };
  const { network } = found;
  const { plant, problems: more } = compile(network);
  problems.push(...more);
  if (!plant || hasErrors(problems)) return { network: undefined, problems };
  const { report, problems: odd } = collector();
  fastExchanges(plant, report);
  cornerWarnings(network, report);
  problems.push(...odd);
  return { network: { ...network, tree, files, start: plant }, problems };
}

interface Resolved {
  readonly network: Network;
  readonly problems: readonly Problem[];
}

function resolved(tree: MapNode, path: string, files: Files): Resolved {
  const { report, problems } = collector();
  return { network: resolveNetwork(tree, path, report, files), problems };
}

/** All that can be told without a plant, each cause once; `told` is what is wrong besides. */
function problemsOf({ network, problems }: Resolved, told: readonly Problem[] = []): Problem[] {
  const { problems: broken, flowsKnown } = checkNetwork(network, evaluateNames(network));
  const all = [...problems, ...broken];
  if (!hasErrors(all) && !hasErrors(told)) return all;
  all.push(...impossible(network, flowsKnown));
  // A name may be used just where something is wrong, or misspelt there.
  const blind = network.compartments.some((c) => c.kind === unknownKind);
  return all.filter((p) => p.code !== "unused-name" || !(blind || standsElsewhere(p.at) || isMeant(p.at, all)));
}

/** What is missing since the key that should hold it, or an exchange, was refused. */
const echoes = {
  feeds: ["no-feed", "unreachable"],
  outlets: ["no-outlet", "unknown-place", "outlet-dry"],
  compartments: ["unknown-place"],
} as const;

function withoutEchoes(problems: readonly Problem[], tree: MapNode, told: readonly Problem[]): Problem[] {
  const refused = tree.entries.some(({ key }) =>
    told.some((p) => p.code === "unknown-key" && p.at.from === key.at.from),
  );
  const dropped = new Set<string>(
    Object.entries(echoes).flatMap(([key, codes]) => (refused && !child(tree, key) ? codes : [])),
  );
  if (told.some((p) => p.code === "not-here")) dropped.add("unreachable");
  return problems.filter((p) => !dropped.has(p.code));
}

/** Is a name what a misspelt one is taken for? */
function isMeant({ source: { text }, from, to }: Span, problems: readonly Problem[]): boolean {
  const name = text.slice(from, to);
  return problems.some((p) => p.code === "unknown-name" && p.fix.includes(`\`${name}\``));
}

/** Does a name stand anywhere in its file but at its own place? */
function standsElsewhere({ source: { text }, from, to }: Span): boolean {
  const name = text.slice(from, to);
  const word = /\w/;
  for (let i = text.indexOf(name); i >= 0; i = text.indexOf(name, i + 1)) {
    if (i !== from && !word.test(text[i - 1] ?? "") && !word.test(text[i + name.length] ?? "")) return true;
  }
  return false;
}
