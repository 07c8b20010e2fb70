import { chemistryEntries } from "./catalogue/chemistry.js";
import { dataEntries } from "./catalogue/data.js";
import { detectorEntries } from "./catalogue/detectors.js";
import { flowEntries } from "./catalogue/flows.js";
import { libraryEntries } from "./catalogue/library.js";
import { nameEntries } from "./catalogue/names.js";
import { rateLawEntries } from "./catalogue/rate-laws.js";
import { reactingTrialEntries } from "./catalogue/reacting-trials.js";
import { reuseEntries } from "./catalogue/reuse.js";
import { runEntries } from "./catalogue/runs.js";
import { shapeEntries } from "./catalogue/shape.js";
import { studyEntries } from "./catalogue/study.js";
import { valueEntries } from "./catalogue/values.js";
import { vesselTrialEntries } from "./catalogue/vessel-trials.js";
import { yamlEntries } from "./catalogue/yaml.js";
import { zoneEntries } from "./catalogue/zones.js";

/** The catalogue by what its problems are about, as the manual has it. */
export const catalogueGroups = {
  "A file as YAML": yamlEntries,
  "Keys and what stands at them": shapeEntries,
  "Values, units, expressions": valueEntries,
  Names: nameEntries,
  "Streams, flows, volumes": flowEntries,
  "Zones and their tables": zoneEntries,
  "Parts and variants": reuseEntries,
  "Trials and their tables": dataEntries,
  Detectors: detectorEntries,
  "Trials and the vessel that was tested": vesselTrialEntries,
  "Trials of a reaction": reactingTrialEntries,
  "Chemistries and duties": chemistryEntries,
  "Rate laws": rateLawEntries,
  "Fits: before they run, and what to know of their results": runEntries,
  Studies: studyEntries,
  "Tools for a library": libraryEntries,
} as const;

/** Every problem that backmix can report: code, wording, fix. Codes are stable; wording may improve. */
export const catalogue = {
  ...yamlEntries,
  ...shapeEntries,
  ...valueEntries,
  ...nameEntries,
  ...flowEntries,
  ...zoneEntries,
  ...reuseEntries,
  ...dataEntries,
  ...detectorEntries,
  ...vesselTrialEntries,
  ...reactingTrialEntries,
  ...chemistryEntries,
  ...rateLawEntries,
  ...runEntries,
  ...studyEntries,
  ...libraryEntries,
} as const;
