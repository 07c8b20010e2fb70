import { checkAsked } from "../check/asked.js";
import { checkDuty } from "../check/duty.js";
import { checkTrial } from "../check/trial.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import type { ChangeDocument, Rival, Study } from "../model/study.js";
import type { Problem } from "../problems/problem.js";
import { collector, hasErrors, type Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { openText } from "../read/open.js";
import { beside } from "../read/paths.js";
import { checkShape } from "../read/shape.js";
import { child, itemsOf, type MapNode, type ScalarNode, textOf } from "../read/tree.js";
import { readYaml } from "../read/yaml.js";
import { resolveAims, resolveSweeps } from "../resolve/asked.js";
import { parseDuty } from "./duty.js";
import { parseNetwork } from "./network.js";
import { filesOf, type Parsed, type ParseOptions, parseDocument, type Reading } from "./parsed.js";
import { parseTrial } from "./trial.js";

/** Reads a study and every document that it names; problems of all of them together, file by file. */
export function parseStudy(text: string | Reading, options: ParseOptions = {}): Parsed<Study> {
  const path = options.path ?? "study.yaml";
  const files = filesOf(path, options);
  return parseDocument("study", text, { ...options, path }, (tree, report, adopt) => {
    const open = <T>(
      key: string,
      parse: (text: string, options: ParseOptions) => Parsed<T>,
    ): (T & { file: string })[] =>
      filesUnder(tree, key, files, report).flatMap(({ file, content }) => {
        const parsed = parse(content, { ...options, path: file });
        adopt(parsed.problems);
        return parsed.document ? [{ ...parsed.document, file }] : [];
      });
    const rivals = toldApart(open("rivals", parseNetwork)).map(
      (n): Rival => ({ network: n, tree: n.tree, path: n.file, files: n.files }),
    );
    const trials = open("trials", (content, own) =>
      parseTrial(content, own, (trial, tell) => {
        // One with errors is held against the first rival, too.
        if (rivals[0]) checkTrial(rivals[0].network, trial, tell);
      }),
    );
    const duties = open("duties", (content, own) =>
      parseDuty(content, own, (duty, _, take) =>
        take(firstFaults(rivals, (network, tell) => checkDuty(network, duty, tell))),
      ),
    );
    const changes = open("changes", parseChange);
    const listed = { duties: byFile(tree, "duties", duties), changes: byFile(tree, "changes", changes) };
    const sweeps = resolveSweeps(child(tree, "sweeps"), listed, report);
    const aims = resolveAims(child(tree, "aims"), listed, report);
    checkAsked({ rivals, sweeps, aims }, report);
    const faults = firstFaults(rivals, (network, own) => {
      for (const trial of trials) checkTrial(network, trial, own);
      for (const duty of duties) checkDuty(network, duty, own);
      if (trials.length > 1) for (const duty of duties) perTrialTold(network, duty, own);
    });
    adopt(faults);
    return {
      title: textOf(tree, "study") ?? "",
      at: child(tree, "study")?.at ?? tree.at,
      path,
      notes: textOf(tree, "notes"),
      rivals,
      trials,
      duties,
      changes,
      sweeps,
      aims,
      out: textOf(tree, "out"),
      seed: Number(textOf(tree, "seed") ?? 1),
    };
  });
}

/** What the first rival finds fault with: the same slip shows against every rival, once is enough. */
function firstFaults(rivals: readonly Rival[], check: (network: Network, report: Report) => void): Problem[] {
  for (const { network } of rivals) {
    const { report, problems } = collector();
    check(network, report);
    if (hasErrors(problems)) return problems;
  }
  return [];
}

/** Every file that a list names, with its document where it could be read. */
function byFile<T extends { readonly file: string }>(
  tree: MapNode,
  key: string,
  documents: readonly T[],
): Map<string, T | undefined> {
  const paths = itemsOf(child(tree, key)).flatMap((item) =>
    item.type === "scalar" ? [beside(item.at.source.path, item.text)] : [],
  );
  return new Map(paths.map((path) => [path, documents.find((d) => d.file === path)]));
}

/** What has a value in each trial must have one in a duty. */
function perTrialTold(network: Network, duty: Duty, report: Report): void {
  for (const { name, perTrial } of network.names) {
    if (perTrial && !duty.settings.has(name)) report("per-trial-duty", duty.at, { name, duty: duty.title });
  }
}

/** Rivals of one title are told apart by their files wherever results name them. */
function toldApart<T extends { readonly title: string; readonly file: string }>(rivals: readonly T[]): T[] {
  const last = (file: string): string => file.slice(file.lastIndexOf("/") + 1);
  return rivals.map((rival) => {
    const { title, file } = rival;
    const others = rivals.filter((r) => r !== rival && r.title === title);
    if (others.length === 0) return rival;
    const alike = others.some((r) => last(r.file) === last(file));
    return { ...rival, title: `${title} (${alike ? file : last(file)})` };
  });
}

interface NamedFile {
  readonly file: string;
  readonly content: string;
}

function filesUnder(tree: MapNode, key: string, files: Files, report: Report): NamedFile[] {
  const named = itemsOf(child(tree, key)).filter((item): item is ScalarNode => item.type === "scalar");
  const seen = new Map<string, ScalarNode>();
  return named.flatMap((item) => {
    const file = beside(item.at.source.path, item.text);
    const earlier = seen.get(file);
    seen.set(file, earlier ?? item);
    if (earlier) {
      report("named-twice", item.at, { path: item.text, key }, { at: earlier.at, says: "named first here" });
      return [];
    }
    const content = openText(file, item, files, report);
    return content === undefined ? [] : [{ file, content }];
  });
}

/** A network document that is only a `change:`. */
export function parseChange(text: string, options: ParseOptions = {}): Parsed<ChangeDocument> {
  const path = options.path ?? "change.yaml";
  const { report, problems } = collector();
  const tree = readYaml({ path, text }, report);
  if (!tree || !checkShape(tree, "network", report)) return { document: undefined, problems };
  const change = child(tree, "change");
  const title = child(tree, "network") ?? tree;
  if (change?.type !== "map") {
    report("no-change", title.at, { title: textOf(tree, "network") ?? "" });
    return { document: undefined, problems };
  }
  const base = tree.entries.find(({ key }) => key.text === "based-on");
  if (base) {
    report("change-with-base", base.key.at, { title: textOf(tree, "network") ?? "" });
    return { document: undefined, problems };
  }
  const document = { title: textOf(tree, "network") ?? "", path, notes: textOf(tree, "notes"), at: title.at, change };
  return { document, problems };
}
