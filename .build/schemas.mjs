// Writes what is made from the declarations of the documents: the JSON Schemas that editors read (committed)
// and the validators compiled ahead of time with the shapes beside them (not committed).
import { existsSync, mkdirSync, readdirSync, readFileSync, renameSync, statSync, writeFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";
import { build, transform } from "esbuild";

const root = dirname(dirname(fileURLToPath(import.meta.url)));
const validatorsFile = join(root, "src/schema/validators.js");

/** Makes schemas and validators; returns the texts by path, writes nothing. */
export async function makeSchemas() {
  const { documentSchemas, documentShapes, validatorSchema, kinds } = await loadDeclarations();
  const shapes = documentShapes(kinds);
  const schemas = documentSchemas(shapes);
  const files = new Map();
  for (const [kind, schema] of Object.entries(schemas))
    files.set(join(root, "schemas", `${kind}.schema.json`), `${JSON.stringify(schema, null, 2)}\n`);
  files.set(validatorsFile, await validatorSource(mapValues(schemas, validatorSchema), shapes));
  return files;
}

/** Makes and writes them, touching only files that changed. */
export async function writeSchemas() {
  for (const [path, text] of await makeSchemas()) writeIfNew(path, text);
}

/** True where the validators are missing or older than a declaration. */
export function schemasAreStale() {
  if (!existsSync(validatorsFile)) return true;
  const made = statSync(validatorsFile).mtimeMs;
  return ["src/schema", "src/schema/documents", "src/compartments", ".build"].some((folder) =>
    readdirSync(join(root, folder)).some(
      (file) => /\.(ts|mjs)$/.test(file) && statSync(join(root, folder, file)).mtimeMs > made,
    ),
  );
}

const loadDeclarations = () =>
  load(`
    export { documentSchemas } from "./src/schema/json-schema.ts";
    export { validatorSchema } from "./src/schema/bare.ts";
    export { documentShapes } from "./src/schema/documents.ts";
    export { kinds } from "./src/compartments/index.ts";`);

/** Writes the reference manual from the declarations and the broken examples of the tests. */
export async function writeManual() {
  const { manualOf } = await load(`export { manualOf } from "./.build/manual.ts";`);
  writeIfNew(join(root, "schemas", "README.md"), manualOf(root));
}

/** Runs TypeScript of ours: bundles it and imports the bundle. */
async function load(contents) {
  const { outputFiles } = await build({
    stdin: { contents, resolveDir: root, loader: "ts" },
    bundle: true,
    format: "esm",
    platform: "node",
    banner: { js: 'import { createRequire } from "node:module"; const require = createRequire("/");' },
    write: false,
    logLevel: "error",
  });
  return import(`data:text/javascript;base64,${Buffer.from(outputFiles[0].text).toString("base64")}`);
}

async function validatorSource(schemas, shapes) {
  const { default: Ajv2020 } = await import("ajv/dist/2020.js");
  const { default: standaloneCode } = await import("ajv/dist/standalone/index.js");
  const ajv = new Ajv2020({
    allErrors: true,
    messages: false, // the catalogue words them
    allowUnionTypes: true,
    strictRequired: false,
    strictTypes: false,
    inlineRefs: false,
    code: { source: true, esm: true, lines: false },
  });
  const names = Object.keys(schemas);
  for (const name of names) ajv.addSchema(schemas[name]);
  const code = standaloneCode(ajv, Object.fromEntries(names.map((name) => [name, `${name}.schema.json`])));
  const entries = names.map((name) => `  ${name}: { shape: ${JSON.stringify(shapes[name])}, validate: ${name} },`);
  const text = `${code}\nexport const documents = {\n${entries.join("\n")}\n};\n`;
  const { code: short } = await transform(text, { minifyWhitespace: true, minifySyntax: true, format: "esm" });
  return `// Written by the build from the declarations in documents/; do not edit.\n${short}`;
}

const mapValues = (of, f) => Object.fromEntries(Object.entries(of).map(([key, value]) => [key, f(value)]));

function writeIfNew(path, text) {
  if (existsSync(path) && readFileSync(path, "utf8") === text) {
    if (path === validatorsFile) writeAtOnce(path, text); // its age tells whether it is up to date
    return;
  }
  writeAtOnce(path, text);
}

/** Other processes may read it meanwhile: they see the old file or the new one. */
function writeAtOnce(path, text) {
  mkdirSync(dirname(path), { recursive: true });
  const draft = `${path}.${process.pid}.tmp`;
  writeFileSync(draft, text);
  renameSync(draft, path);
}

export { root };
