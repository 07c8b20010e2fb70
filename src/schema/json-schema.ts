import { parse } from "yaml";
import type { Json, JsonSchema } from "./json.js";
import { type DocumentKind, documentKinds, type KeyShape, type Shape, sortOf } from "./shape.js";
import { snippetsOf } from "./snippets.js";

export type { Json, JsonSchema } from "./json.js";

/** Keywords that editors use and a validator must be told of. */
export const editorKeywords = ["markdownDescription", "markdownEnumDescriptions", "defaultSnippets", "errorMessage"];

/** Names of the author's own: letters, digits, hyphens, underscores, a letter first. */
export const namePattern = "^[A-Za-z][A-Za-z0-9_-]*$";
export const dottedPattern = "^[A-Za-z][A-Za-z0-9_-]*(\\.[A-Za-z0-9_-]+)*$";

const typeOf = { value: ["string", "number", "boolean"], map: "object", list: "array" } as const;

/**
 * The JSON Schema (draft 2020-12) of a document, for editors and for the validator alike. Alternatives are chosen by `if`, never
 * by `anyOf`, so that each fault gives one error at its own place.
 */
export function documentSchema(kind: DocumentKind, shape: Shape): JsonSchema {
  return {
    $schema: "https://json-schema.org/draft/2020-12/schema",
    $id: `${kind}.schema.json`,
    title: `backmix ${kind}`,
    ...jsonSchema(shape),
  };
}

/** All five documents. */
export const documentSchemas = (shapes: Readonly<Record<DocumentKind, Shape>>): Record<DocumentKind, JsonSchema> =>
  Object.fromEntries(documentKinds.map((kind) => [kind, documentSchema(kind, shapes[kind])])) as Record<
    DocumentKind,
    JsonSchema
  >;

/** The JSON Schema of one place. */
export function jsonSchema(shape: Shape): JsonSchema {
  switch (shape.is) {
    case "text":
      return { type: [...typeOf.value] };
    case "quantity":
      return { type: ["string", "number"] };
    case "whole":
      return {
        type: "integer",
        minimum: shape.atLeast,
        ...(shape.atMost === undefined ? {} : { maximum: shape.atMost }),
      };
    case "choice":
      return { enum: shape.of.map((word) => (/^\d+$/.test(word) ? Number(word) : word)) };
    case "name":
      return { type: "string", pattern: dottedPattern };
    case "nothing":
      return { type: "null" };
    case "later":
      return refused(shape.says);
    case "list":
      return {
        type: "array",
        items: { ...jsonSchema(shape.of), ...offered(snippetsOf(shape)) },
        ...(shape.length === undefined ? {} : { minItems: shape.length, maxItems: shape.length }),
      };
    case "named":
      return {
        type: "object",
        ...(shape.keys === "free"
          ? {}
          : { propertyNames: { pattern: shape.keys === "dotted" ? dottedPattern : namePattern } }),
        ...(shape.later ? { properties: mapValues(shape.later, refused) } : {}),
        additionalProperties: jsonSchema(shape.each),
        ...offered(snippetsOf(shape)),
      };
    case "record":
      return {
        type: "object",
        ...members(shape.keys),
        ...(shape.oneOf ? { oneOf: shape.oneOf.map((key) => ({ required: [key] })) } : {}),
      };
    case "variant":
      return variantSchema(shape);
    case "depends": {
      const there = { type: "object", required: [shape.on] };
      return { type: "object", ...when(there, jsonSchema(shape.present), jsonSchema(shape.absent)) };
    }
    case "either":
      return eitherSchema(shape.of);
  }
}

const offered = (snippets: readonly Json[]): JsonSchema => (snippets.length > 0 ? { defaultSnippets: snippets } : {});

const branches = ["if", "then", "else"];

/** `if`, `then`, `else`. (Zipped: an object with a `then` written into it would look like a promise.) */
const when = (...schemas: JsonSchema[]): JsonSchema => Object.fromEntries(schemas.map((s, i) => [branches[i], s]));

const notYet = "Part of the language, not in this version of backmix";

const refused = (says: string): JsonSchema => ({
  description: `${notYet}. ${says}`,
  not: {},
  errorMessage: `${notYet}.`,
});

/** Properties with their descriptions, those required, and no others. */
function members(keys: Readonly<Record<string, KeyShape>>): JsonSchema {
  const required = Object.keys(keys).filter((key) => keys[key].required);
  const needing = Object.keys(keys).filter((key) => keys[key].needs !== undefined);
  return {
    properties: mapValues(keys, member),
    ...(required.length > 0 ? { required } : {}),
    ...(needing.length > 0
      ? { dependentRequired: Object.fromEntries(needing.map((key) => [key, [keys[key].needs ?? ""]])) }
      : {}),
    additionalProperties: false,
  };
}

function member(key: KeyShape): JsonSchema {
  if (key.later) return refused(key.says);
  if (key.elsewhere) {
    const { says, fix } = key.elsewhere;
    return { description: `${says}: ${fix}.`, not: {}, errorMessage: `${says}.` };
  }
  const example = key.example === undefined ? undefined : (parse(key.example) as Json);
  const schema = jsonSchema(key.shape);
  const own = Array.isArray(schema.defaultSnippets) ? (schema.defaultSnippets as readonly Json[]) : [];
  return {
    description: key.says,
    markdownDescription: markdown(key),
    ...schema,
    ...(key.default === undefined ? {} : { default: parse(key.default) as Json }),
    ...(example === undefined
      ? {}
      : { examples: [example], ...offered([...own, { label: key.example ?? "", body: example }]) }),
  };
}

function markdown(key: KeyShape): string {
  const lines = [key.says];
  if (key.default !== undefined) lines.push(`Without it: \`${key.default}\`.`);
  if (key.example !== undefined) lines.push(`For example \`${key.example}\`.`);
  return lines.join("\n\n");
}

function variantSchema(shape: Extract<Shape, { is: "variant" }>): JsonSchema {
  const names = Object.keys(shape.of).filter((name) => !shape.of[name].later);
  return {
    type: "object",
    required: [shape.by],
    properties: {
      [shape.by]: { enum: names, markdownEnumDescriptions: names.map((name) => shape.of[name].says) },
    },
    allOf: names.map((name) =>
      when(
        { type: "object", properties: { [shape.by]: { const: name } }, required: [shape.by] },
        jsonSchema({ is: "record", keys: shape.of[name].keys }),
      ),
    ),
  };
}

function eitherSchema(alternatives: readonly Shape[]): JsonSchema {
  const types = new Set<string>();
  const conditions: JsonSchema[] = [];
  for (const alternative of alternatives) {
    const sort = sortOf(alternative);
    if (alternative.is === "nothing") types.add("null");
    if (alternative.is === "nothing" || sort === undefined) continue;
    const schema = jsonSchema(alternative);
    const type = schema.type ?? (alternative.is === "choice" ? typeOf.value : typeOf[sort]);
    for (const t of Array.isArray(type) ? type : [type]) types.add(String(t));
    if (alternative.is !== "quantity" && alternative.is !== "text")
      conditions.push(when({ type: Array.isArray(type) ? [...type] : type }, schema));
  }
  return { type: [...types], ...(conditions.length > 0 ? { allOf: conditions } : {}) };
}

export const mapValues = <A, B>(of: Readonly<Record<string, A>>, f: (a: A) => B): Record<string, B> =>
  Object.fromEntries(Object.entries(of).map(([key, a]) => [key, f(a)]));
