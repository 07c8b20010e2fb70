import type { Duty } from "../../model/duty.js";
import { parseAny } from "../../parse/any.js";
import { parseChemistry } from "../../parse/chemistry.js";
import { parseDuty } from "../../parse/duty.js";
import { parseNetwork } from "../../parse/network.js";
import { type Parsed, type ParseOptions, readDocument } from "../../parse/parsed.js";
import { parseStudy } from "../../parse/study.js";
import { parseTrial } from "../../parse/trial.js";
import type { Problem } from "../../problems/problem.js";
import { hasErrors } from "../../problems/report.js";
import { documentKind } from "../../read/shape.js";
import type { Figure } from "../input.js";
import { chemistryFigures } from "./chemistry-figures.js";
import { dutyFigures } from "./duty-figures.js";
import { networkFigures } from "./network-figures.js";
import { studyFigures } from "./study-figures.js";
import { trialFigures } from "./trial-figures.js";

/** What a file shows while it is being written: pictures where it is sound, and everything wrong with it. */
export interface LiveView {
  /** "network", "trial", …; undefined where the file does not say what it is. */
  readonly kind: string | undefined;
  readonly title: string;
  /** Empty where the file has errors. */
  readonly figures: readonly Figure[];
  readonly problems: readonly Problem[];
}

export interface LiveOptions extends ParseOptions {
  readonly path: string;
  /** Files that are watched too: a duty is shown in the networks among them. */
  readonly beside?: readonly string[];
}

/** Draws any document. Never throws on bad input; fast, nothing is fitted. */
export function liveView(text: string, options: LiveOptions): LiveView {
  const reading = readDocument(text, options.path);
  const only = reading.tree && documentKind(reading.tree);
  if (only === "study") return drawn(options.path, "study", parseStudy(reading, options), studyFigures);
  if (only === "chemistry") return drawn(options.path, "chemistry", parseChemistry(reading, options), chemistryFigures);
  if (only === "duty") return ofDuty(parseDuty(reading, options), options);
  const { kind, network, problems } = parseAny(text, options);
  const bare = { kind, title: options.path, figures: [], problems };
  if (hasErrors(problems)) return bare;
  if (network) return { ...bare, title: network.title, figures: networkFigures(network.start) };
  if (kind === "trial") {
    const { document } = parseTrial(text, options);
    if (!document) return bare;
    const vessel = document.vessel === undefined ? undefined : vesselAt(document.vessel, options);
    return { ...bare, title: document.title, figures: trialFigures(document, vessel) };
  }
  return bare;
}

/** A duty in the vessels beside it; alone, its rate laws in a flask. */
function ofDuty({ document, problems }: Parsed<Duty>, { path, beside = [], ...options }: LiveOptions): LiveView {
  const bare = { kind: "duty", title: document?.title ?? path, figures: [], problems };
  if (!document || hasErrors(problems)) return bare;
  const vessels = beside.flatMap((file) => {
    const content = file === path ? undefined : options.read?.(file);
    const text = content === undefined || typeof content === "string" ? content : new TextDecoder().decode(content);
    if (text === undefined) return [];
    const reading = readDocument(text, file);
    if (!reading.tree || documentKind(reading.tree) !== "network") return [];
    return parseNetwork(reading, { ...options, path: file }).document ?? [];
  });
  if (vessels.length === 0) {
    return { ...bare, figures: document.chemistry ? chemistryFigures(document.chemistry) : [] };
  }
  const found = dutyFigures(document, vessels);
  return { ...bare, figures: found.figures, problems: [...problems, ...found.problems] };
}

function drawn<T extends { readonly title: string }>(
  path: string,
  kind: string,
  { document, problems }: Parsed<T>,
  figures: (document: T) => readonly Figure[],
): LiveView {
  const sound = document && !hasErrors(problems) ? document : undefined;
  return { kind, title: sound?.title ?? path, figures: sound ? figures(sound) : [], problems };
}

function vesselAt(path: string, options: ParseOptions) {
  const content = options.read?.(path);
  if (content === undefined) return undefined;
  const text = typeof content === "string" ? content : new TextDecoder().decode(content);
  return parseNetwork(text, { ...options, path }).document;
}
