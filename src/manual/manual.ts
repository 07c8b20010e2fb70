import { kinds } from "../compartments/index.js";
import { documentShapes } from "../schema/documents.js";
import { type DocumentKind, documentKinds } from "../schema/shape.js";
import { keysSection } from "./keys.js";
import { anchor, block, code, parts } from "./markdown.js";
import { type Broken, problemsSection } from "./problems.js";
import { valuesSection } from "./values.js";

/** What the manual shows and does not make itself. */
export interface ManualInputs {
  /** A whole document of each kind, as it is shipped. */
  readonly documents: Readonly<Record<DocumentKind, string>>;
  readonly broken: readonly Broken[];
  /** Pages of what was measured on curves with known truth, each under a heading of its own. */
  readonly measured: readonly string[];
}

const about: Readonly<Record<DocumentKind, string>> = {
  network:
    "The vessel: compartments, streams, parameters. It says how the liquid goes, and what of that a fit may move.",
  trial: "One tracer test: what was injected, the flows of the day, the readings and how their logs are to be cleaned.",
  chemistry: "What reacts: species, constants, rate laws.",
  duty: "One operating point: feeds, temperature, and the figures that count.",
  study: "The whole job: rival networks, trials, duties, and the changes to compare.",
};

/** The reference manual, in Markdown, from the same declarations that the program checks documents with. */
export function manual({ documents, broken, measured }: ManualInputs): string {
  const shapes = documentShapes(kinds);
  const headings = ["Values, units, names", ...documentKinds.map(titleOf), "Problems", "Measured"];
  return `${parts(
    "# The backmix language: reference",
    "Written by the build from the declarations that the program itself checks with; do not edit.",
    "Every document is a YAML 1.2 file. Its first key says what it is, and the value of that key is the title. `backmix check FILE` looks it over. " +
      "An editor that knows YAML schemas completes keys and shows this text on hover where the first line of a file is, for example, " +
      `${code("# yaml-language-server: $schema=../../schemas/network.schema.json")} (the path is relative to the file).`,
    headings.map((h) => `- [${h}](#${anchor(h)})`).join("\n"),
    `## ${headings[0]}`,
    valuesSection(),
    ...documentKinds.map((kind) =>
      parts(`## ${titleOf(kind)}`, about[kind], block("yaml", documents[kind]), keysSection(kind, shapes[kind])),
    ),
    "## Problems",
    problemsSection(broken),
    "## Measured",
    "What findings and figures are worth, measured on simulated tests whose truth is known; made by tests, which fail where these pages are stale.",
    ...measured,
  )}\n`;
}

const titleOf = (kind: DocumentKind): string => `The ${kind}`;
