import { checkTrial } from "../check/trial.js";
import type { Trial } from "../model/trial.js";
import type { Problem } from "../problems/problem.js";
import { collector } from "../problems/report.js";
import { openText } from "../read/open.js";
import { checkShape, documentKind } from "../read/shape.js";
import { child, type MapNode } from "../read/tree.js";
import { plannedIn } from "../resolve/planned.js";
import type { DocumentKind } from "../schema/shape.js";
import { parseChemistry } from "./chemistry.js";
import { parseDuty } from "./duty.js";
import { type NetworkDocument, parseNetwork } from "./network.js";
import { filesOf, type Held, type ParseOptions, readDocument } from "./parsed.js";
import { parseChange, parseStudy } from "./study.js";
import { parseTrial } from "./trial.js";

/** What a file turned out to be, and everything wrong with it. */
export interface AnyDocument {
  readonly kind: DocumentKind | "change" | undefined;
  readonly network: NetworkDocument | undefined;
  readonly problems: readonly Problem[];
}

/** Reads any of the five documents, told apart by the first key; a network that is only a change is one too. */
export function parseAny(text: string, options: ParseOptions = {}): AnyDocument {
  const reading = readDocument(text, options.path ?? "-");
  const { tree } = reading;
  if (!tree) return { kind: undefined, network: undefined, problems: reading.problems };
  const kind = documentKind(tree);
  if (kind === "network" && isChange(tree)) {
    return { kind: "change", network: undefined, problems: parseChange(text, options).problems };
  }
  if (kind === "network") {
    const parsed = parseNetwork(reading, options);
    return { kind, network: parsed.document, problems: parsed.problems };
  }
  if (kind === undefined) {
    const { report, problems } = collector();
    checkShape(tree, "network", report);
    return { kind, network: undefined, problems: [...reading.problems, ...problems] };
  }
  if (kind === "trial") {
    const { problems } = parseTrial(reading, options, holdAgainstVessel(options));
    return { kind, network: undefined, problems };
  }
  const parse = { chemistry: parseChemistry, duty: parseDuty, study: parseStudy }[kind];
  return { kind, network: undefined, problems: parse(reading, options).problems };
}

/** Does a trial fit the vessel that it names? */
const holdAgainstVessel =
  (options: ParseOptions): Held<Trial> =>
  (trial, report, adopt) => {
    if (trial.vessel === undefined) return;
    const at = trial.vesselAt ?? trial.at;
    const text = at.source.text.slice(at.from, at.to).replace(/^(["'])(.*)\1$/, "$2");
    const content = openText(trial.vessel, { text, at }, filesOf(trial.vessel, options), report);
    if (content === undefined) return;
    const parsed = parseNetwork(content, { ...options, path: trial.vessel });
    if (parsed.document) checkTrial(parsed.document, plannedIn(trial, parsed.document.basis), report);
    else adopt(parsed.problems);
  };

/** A change alone, without a base to lay it over. */
const isChange = (tree: MapNode): boolean => child(tree, "change") !== undefined && !child(tree, "based-on");
