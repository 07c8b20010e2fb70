import { figures, type Html, section } from "./html.js";
import type { StudyReport } from "./input.js";
import { analysesTable } from "./sections/analyses.js";
import { aimsSection, sweepsSection } from "./sections/asked.js";
import { changesSection } from "./sections/changes.js";
import { dataSection } from "./sections/data.js";
import { findingsSection } from "./sections/findings.js";
import { assumptionsSection, cautionsSection, provenanceSection } from "./sections/grounds.js";
import { identifiabilitySection, parametersSection } from "./sections/parameters.js";
import { predictionsSection } from "./sections/predictions.js";
import { regulatedSection } from "./sections/regulated.js";
import { rivalsSection } from "./sections/rivals.js";

/** The parts of a report in reading order, after the answer. One function each; empty where there is nothing to say. */
export const sections: readonly ((report: StudyReport) => Html)[] = [
  ({ vessel, parameters }) =>
    section(
      "vessel",
      parameters.length > 0 ? "The vessel as fitted" : "The vessel as written",
      vessel ? [figures([vessel])] : [],
    ),
  dataSection,
  ({ curves, analyses }) => section("curves", "Measured and fitted", [figures(curves), analysesTable(analyses ?? [])]),
  findingsSection,
  rivalsSection,
  parametersSection,
  identifiabilitySection,
  ({ residence }) => section("residence", "How long the liquid stays", [figures(residence)]),
  predictionsSection,
  ({ inTime }) => section("in-time", "In time", [figures(inTime)]),
  changesSection,
  aimsSection,
  sweepsSection,
  regulatedSection,
  assumptionsSection,
  cautionsSection,
  provenanceSection,
];
