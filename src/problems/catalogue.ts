import { chemistryEntries } from "./catalogue/chemistry.js";
import { dataEntries } from "./catalogue/data.js";
import { flowEntries } from "./catalogue/flows.js";
import { libraryEntries } from "./catalogue/library.js";
import { nameEntries } from "./catalogue/names.js";
import { runEntries } from "./catalogue/runs.js";
import { shapeEntries } from "./catalogue/shape.js";
import { studyEntries } from "./catalogue/study.js";
import { valueEntries } from "./catalogue/values.js";
import { yamlEntries } from "./catalogue/yaml.js";

/** Every problem that backmix can report: code, wording, fix. Codes are stable; wording may improve. */
export const catalogue = {
  ...yamlEntries,
  ...shapeEntries,
  ...valueEntries,
  ...nameEntries,
  ...flowEntries,
  ...dataEntries,
  ...chemistryEntries,
  ...runEntries,
  ...studyEntries,
  ...libraryEntries,
} as const;
