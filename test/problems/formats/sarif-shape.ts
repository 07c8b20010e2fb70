/**
 * The parts of the SARIF 2.1.0 schema (OASIS, errata 01, 2023) that our log uses, closed against other keys. Written out from the
 * specification, sections 3.13 to 3.30; from memory where the standard gives only prose.
 */
const text = {
  type: "object",
  required: ["text"],
  properties: { text: { type: "string", minLength: 1 } },
  additionalProperties: false,
};

const location = {
  type: "object",
  required: ["physicalLocation"],
  additionalProperties: false,
  properties: {
    message: text,
    physicalLocation: {
      type: "object",
      required: ["artifactLocation", "region"],
      additionalProperties: false,
      properties: {
        artifactLocation: {
          type: "object",
          required: ["uri"],
          additionalProperties: false,
          properties: { uri: { type: "string", pattern: "^[A-Za-z0-9%._~!'()*:/-]*$" } },
        },
        region: {
          type: "object",
          required: ["startLine", "startColumn", "endLine", "endColumn"],
          additionalProperties: false,
          properties: Object.fromEntries(
            ["startLine", "startColumn", "endLine", "endColumn"].map((k) => [k, { type: "integer", minimum: 1 }]),
          ),
        },
      },
    },
  },
};

const driver = {
  type: "object",
  required: ["name"],
  additionalProperties: false,
  properties: {
    name: { type: "string" },
    version: { type: "string" },
    rules: {
      type: "array",
      uniqueItems: true,
      items: { type: "object", required: ["id"], properties: { id: { type: "string" } }, additionalProperties: false },
    },
  },
};

const result = {
  type: "object",
  required: ["message"],
  additionalProperties: false,
  properties: {
    ruleId: { type: "string" },
    ruleIndex: { type: "integer", minimum: -1 },
    level: { enum: ["none", "note", "warning", "error"] },
    message: text,
    locations: { type: "array", items: location },
    relatedLocations: { type: "array", uniqueItems: true, items: location },
  },
};

export const sarifShape = {
  type: "object",
  required: ["version", "runs"],
  additionalProperties: false,
  properties: {
    $schema: { type: "string" },
    version: { const: "2.1.0" },
    runs: {
      type: "array",
      items: {
        type: "object",
        required: ["tool"],
        additionalProperties: false,
        properties: {
          tool: { type: "object", required: ["driver"], additionalProperties: false, properties: { driver } },
          columnKind: { enum: ["utf16CodeUnits", "unicodeCodePoints"] },
          results: { type: "array", items: result },
        },
      },
    },
  },
};
