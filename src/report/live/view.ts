import { parseAny } from "../../parse/any.js";
import { parseChemistry } from "../../parse/chemistry.js";
import { parseNetwork } from "../../parse/network.js";
import type { ParseOptions } from "../../parse/parsed.js";
import { parseStudy } from "../../parse/study.js";
import { parseTrial } from "../../parse/trial.js";
import type { Problem } from "../../problems/problem.js";
import { hasErrors } from "../../problems/report.js";
import type { Figure } from "../input.js";
import { chemistryFigures } from "./chemistry-figures.js";
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

/** Draws any document. Never throws on bad input; fast, nothing is fitted. */
export function liveView(text: string, options: ParseOptions & { readonly path: string }): LiveView {
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
  if (kind === "chemistry") {
    const { document } = parseChemistry(text, options);
    return document ? { ...bare, title: document.title, figures: chemistryFigures(document) } : bare;
  }
  if (kind === "study") {
    const { document } = parseStudy(text, options);
    return document ? { ...bare, title: document.title, figures: studyFigures(document) } : bare;
  }
  return bare;
}

function vesselAt(path: string, options: ParseOptions) {
  const content = options.read?.(path);
  if (content === undefined) return undefined;
  const text = typeof content === "string" ? content : new TextDecoder().decode(content);
  return parseNetwork(text, { ...options, path }).document;
}
