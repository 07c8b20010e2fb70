import { readFileSync } from "node:fs";
import { join } from "node:path";
import Ajv2020Module from "ajv/dist/2020.js";
import { describe, expect, test } from "vitest";
import { parse } from "yaml";
import { kinds } from "../../src/compartments/index.js";
import { documentShapes } from "../../src/schema/documents.js";
import {
  documentSchemas,
  editorKeywords,
  type Json,
  type JsonSchema,
  jsonSchema,
} from "../../src/schema/json-schema.js";
import { documentKinds, type KeyShape, type Shape } from "../../src/schema/shape.js";
import { examples } from "../read/documents.js";

const Ajv2020 = Ajv2020Module.default;
const shapes = documentShapes(kinds);
const schemas = documentSchemas(shapes);

const ajv = new Ajv2020({ allErrors: true, allowUnionTypes: true, strictTypes: false, strictRequired: false });
ajv.addVocabulary(editorKeywords);
const validator = (schema: JsonSchema) => ajv.compile(schema);

describe.each(documentKinds)("%s.schema.json", (kind) => {
  test("is up to date: run `npm run build` and commit it", () => {
    const file = join(import.meta.dirname, `../../schemas/${kind}.schema.json`);
    expect(JSON.parse(readFileSync(file, "utf8"))).toEqual(schemas[kind]);
  });

  test("accepts the manual's example as an editor reads it, numbers as numbers", () => {
    const validate = validator(schemas[kind]);
    expect(validate(parse(examples[kind])) ? [] : validate.errors).toEqual([]);
  });

  test("every key says what it is for, and every example and default is right there", () => {
    for (const [path, key] of keysOf(shapes[kind], kind)) {
      expect(key.says, path).toMatch(/^\S.*[.?]$/s);
      const validate = validator(jsonSchema(key.shape));
      for (const text of [key.example, key.default])
        if (text !== undefined) expect(validate(parse(text)), `${path}: ${text}`).toBe(true);
    }
  });
});

test("an editor refuses what the command line refuses", () => {
  const refused = [
    "network: a\nformat: 2",
    "network: a\nformat: 1\nbasis: weight",
    "network: a\nformat: 1\ncompartments: {a: {kind: zones, volume: 1 L, to: b}}",
    "network: a\nformat: 1\ncompartments: {a: {kind: dead, volume: 1 L, to: b}}",
    "network: a\nformat: 1\nchange: {}\noutlets: [b]",
  ];
  const validate = validator(schemas.network);
  for (const text of refused) expect(validate(parse(text)), text).toBe(false);
  expect(validate(parse(examples.change))).toBe(true);
});

/** All keys of a shape that this version honours, with their paths. */
function keysOf(shape: Shape, path: string): [string, KeyShape][] {
  const inRecord = (keys: Readonly<Record<string, KeyShape>>): [string, KeyShape][] =>
    Object.entries(keys)
      .filter(([, key]) => !key.later)
      .flatMap(
        ([name, key]) => [[`${path}.${name}`, key], ...keysOf(key.shape, `${path}.${name}`)] as [string, KeyShape][],
      );
  switch (shape.is) {
    case "record":
      return inRecord(shape.keys);
    case "variant":
      return Object.values(shape.of).flatMap((variant) => inRecord(variant.keys));
    case "named":
      return keysOf(shape.each, `${path}.*`);
    case "list":
      return keysOf(shape.of, `${path}[]`);
    case "either":
      return shape.of.flatMap((s) => keysOf(s, path));
    case "depends":
      return [...keysOf(shape.present, path), ...keysOf(shape.absent, path)];
    default:
      return [];
  }
}

test("a schema is plain JSON", () => {
  expect(JSON.parse(JSON.stringify(schemas.network)) as Json).toEqual(schemas.network);
});

describe.each(documentKinds)("what an editor offers in a %s", (kind) => {
  test("the schema itself is right by the rules of JSON Schema 2020-12", () => {
    expect(ajv.validateSchema(schemas[kind]) === true ? [] : ajv.errors).toEqual([]);
  });

  test("every snippet fits where it is offered", () => {
    for (const part of partsOf(schemas[kind])) {
      if (!Array.isArray(part.defaultSnippets)) continue;
      const validate = validator(part);
      for (const { label, body } of part.defaultSnippets as readonly { label: string; body: Json }[]) {
        const typed = JSON.parse(JSON.stringify(body).replace(/\$\{\d+:([^}]*)\}/g, "$1")) as Json;
        expect(validate(typed) ? [] : validate.errors, `${label}: ${JSON.stringify(typed)}`).toEqual([]);
      }
    }
  });
});

test("every kind of compartment is offered, with what it needs", () => {
  const offered = [...partsOf(schemas.network)].flatMap((part) =>
    Array.isArray(part.defaultSnippets)
      ? (part.defaultSnippets as readonly { label: string }[]).map((s) => s.label)
      : [],
  );
  for (const kind in kinds) expect(offered).toContain(`new ${kind}`);
});

/** A schema and every schema in it. */
function* partsOf(schema: Json): Generator<JsonSchema> {
  if (schema === null || typeof schema !== "object") return;
  if (!Array.isArray(schema)) yield schema as JsonSchema;
  for (const [keyword, part] of Object.entries(schema)) {
    if (!["defaultSnippets", "examples", "default", "enum"].includes(keyword)) yield* partsOf(part);
  }
}
