import { editorKeywords, type Json, type JsonSchema, mapValues } from "./json-schema.js";

const annotations = new Set([...editorKeywords, "title", "description", "examples", "default"]);

/**
 * What a validator is compiled from: the schema without what only editors read. Parts that recur or are long stand apart, each a
 * function of its own, so that a run compiles only those that its document meets.
 */
export function validatorSchema(schema: JsonSchema): JsonSchema {
  const plain = inTurn(bare(schema));
  const counts = new Map<string, number>();
  visit(plain, (part) => counts.set(key(part), (counts.get(key(part)) ?? 0) + 1));
  const names = new Map<string, string>();
  for (const [text, n] of counts) if (text.length > (n > 1 ? 200 : 1000)) names.set(text, `part${names.size}`);
  const $defs: Record<string, Json> = {};
  const refer = (part: JsonSchema): JsonSchema => {
    const name = names.get(key(part));
    if (name === undefined) return mapParts(part, refer);
    $defs[name] ??= mapParts(part, refer);
    return { $ref: `#/$defs/${name}` };
  };
  return { ...mapParts(plain, refer), $defs };
}

const key = (part: JsonSchema): string => JSON.stringify(part);

const bare = (schema: JsonSchema): JsonSchema =>
  mapParts(Object.fromEntries(Object.entries(schema).filter(([keyword]) => !annotations.has(keyword))), bare);

/** Variants that exclude one another are asked in turn, until one is the case, and not each of them. */
function inTurn(schema: JsonSchema): JsonSchema {
  const mapped = mapParts(schema, inTurn);
  const branches = Array.isArray(mapped.allOf) ? (mapped.allOf as JsonSchema[]) : [];
  if (branches.length < 2 || new Set(branches.map(asksFor)).size < branches.length) return mapped;
  if (branches.some((branch) => asksFor(branch) === undefined || "else" in branch)) return mapped;
  const chain = branches.reduceRight((rest, branch) => ({ ...branch, else: rest }));
  return { ...mapped, allOf: [chain] };
}

/** The one word at one key that a branch asks for, or undefined where it asks otherwise. */
function asksFor({ if: asked }: JsonSchema): string | undefined {
  const properties = asked && isSchema(asked) ? Object.entries(asked.properties ?? {}) : [];
  const [by, is] = properties[0] ?? [];
  return properties.length === 1 && isSchema(is) && "const" in is ? `${by} ${is.const}` : undefined;
}

function visit(schema: JsonSchema, each: (part: JsonSchema) => void): void {
  mapParts(schema, (part) => {
    each(part);
    visit(part, each);
    return part;
  });
}

/** The schema with each schema directly in it mapped. */
function mapParts(schema: JsonSchema, map: (part: JsonSchema) => JsonSchema): JsonSchema {
  const part = (value: Json): Json => (isSchema(value) ? map(value) : value);
  return Object.fromEntries(
    Object.entries(schema).map(([keyword, value]) => {
      if (keyword === "properties") return [keyword, mapValues(value as JsonSchema, part)];
      return [keyword, Array.isArray(value) ? value.map(part) : part(value)];
    }),
  );
}

const isSchema = (value: Json): value is JsonSchema =>
  value !== null && typeof value === "object" && !Array.isArray(value);
