import { describe, expect, test } from "vitest";
import { parse, stringify } from "yaml";
import { kinds } from "../../src/compartments/index.js";
import { parseAny } from "../../src/parse/any.js";
import { shapeEntries } from "../../src/problems/catalogue/shape.js";
import { valueEntries } from "../../src/problems/catalogue/values.js";
import { yamlEntries } from "../../src/problems/catalogue/yaml.js";
import { printProblems } from "../../src/problems/print.js";
import { documentShapes } from "../../src/schema/documents.js";
import { documentKinds } from "../../src/schema/shape.js";
import { documentWith, placesIn } from "./placing.js";

/** Examples speak of places and files that a document of one key has not; their shape, units and expressions must be right. */
const wrong = new Set([...Object.keys(yamlEntries), ...Object.keys(shapeEntries), ...Object.keys(valueEntries)]);
wrong.delete("unknown-name");

const shapes = documentShapes(kinds);

describe.each(documentKinds)("every example of a %s", (kind) => {
  const shape = shapes[kind];
  // A base beside a change belongs to the other form of a document.
  const places = placesIn(shape).filter(({ steps }) => steps.join() !== "absent,based-on");
  const shown = places.flatMap(({ steps, key }) =>
    [key.example, key.default, key.snippet].flatMap((text) => (text === undefined ? [] : [{ steps, text }])),
  );
  test("is there to be looked at", () => expect(shown.length).toBeGreaterThan(5));
  test.each(shown.map(({ steps, text }) => [`${steps.join(" › ")}: ${text}`, steps, text] as const))(
    "%s",
    (_, steps, text) => {
      const document = stringify(documentWith(shape, steps, parse(text))).replace(
        /((?:volume|flow): \S+\n\s+equals:) 100 min/,
        (_, start: string) => `${start} ${start.startsWith("flow") ? "10 L/min" : "1000 L"}`,
      );
      const { problems } = parseAny(document, { path: `${kind}.yaml` });
      expect(printProblems(problems.filter((p) => wrong.has(p.code)))).toBe("");
    },
  );
});
