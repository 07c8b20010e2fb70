import { chemistryShape } from "./documents/chemistry.js";
import { dutyShape } from "./documents/duty.js";
import { type KindKeys, networkShape } from "./documents/network.js";
import { studyShape } from "./documents/study.js";
import { trialShape } from "./documents/trial.js";
import { orVariant } from "./documents/variant.js";
import type { DocumentKind, Shape } from "./shape.js";

/** All five documents of the language. The build writes JSON Schemas and validators from them. */
export const documentShapes = (kinds: Readonly<Record<string, KindKeys>>): Record<DocumentKind, Shape> => ({
  network: networkShape(kinds),
  trial: orVariant("trial", trialShape),
  chemistry: orVariant("chemistry", chemistryShape),
  duty: orVariant("duty", dutyShape),
  study: orVariant("study", studyShape),
});
