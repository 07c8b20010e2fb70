import { checkTrial } from "../check/trial.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import type { ChangeDocument, Study } from "../model/study.js";
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
  /** Of any other sort, what was understood. */
  readonly document?: Understood | undefined;
  readonly problems: readonly Problem[];
}

export type Understood =
  | { readonly is: "trial"; readonly document: Trial }
  | { readonly is: "chemistry"; readonly document: Chemistry }
  | { readonly is: "duty"; readonly document: Duty }
  | { readonly is: "study"; readonly document: Study }
  | { readonly is: "change"; readonly document: ChangeDocument };

/** Reads any of the five documents, told apart by the first key; a network that is only a change is one too. */
export function parseAny(text: string, options: ParseOptions = {}): AnyDocument {
  const reading = readDocument(text, options.path ?? "-");
  const { tree } = reading;
  if (!tree) return { kind: undefined, network: undefined, problems: reading.problems };
  const kind = documentKind(tree);
  if (kind === "network" && isChange(tree)) {
    const { document, problems } = parseChange(text, options);
    return { kind: "change", network: undefined, ...understood("change", document), problems };
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
    const { document, problems } = parseTrial(reading, options, holdAgainstVessel(options));
    return { kind, network: undefined, ...understood(kind, document), problems };
  }
  if (kind === "chemistry") {
    const { document, problems } = parseChemistry(reading, options);
    return { kind, network: undefined, ...understood(kind, document), problems };
  }
  if (kind === "duty") {
    const { document, problems } = parseDuty(reading, options);
    return { kind, network: undefined, ...understood(kind, document), problems };
  }
  const { document, problems } = parseStudy(reading, options);
  return { kind, network: undefined, ...understood(kind, document), problems };
}

function understood<K extends Understood["is"]>(
  is: K,
  document: Extract<Understood, { is: K }>["document"] | undefined,
): { readonly document?: Understood } {
  // a document belongs to its own sort; the compiler cannot follow that through a union
  return document === undefined ? {} : { document: { is, document } as unknown as Understood };
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
