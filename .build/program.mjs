// Builds the command line: chunks in CommonJS, the compiled code of what most commands use beside them, and the files that start it.
import { execFile } from "node:child_process";
import { chmodSync, mkdirSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { promisify } from "node:util";
import { build, transform } from "esbuild";

const small = { minifyWhitespace: true, minifySyntax: true, logLevel: "warning" };

/** Modules find themselves by `import.meta.url`, which CommonJS lacks. */
const self = 'const importMetaUrl=require("node:url").pathToFileURL(__filename).href;';

/**
 * Bundles `src/cli` of `root` into the folder `dist`.
 * @throws what esbuild throws
 */
export async function buildProgram(root, dist, version) {
  const common = { absWorkingDir: root, bundle: true, platform: "node", target: "node20", write: false, ...small };
  const { outputFiles } = await build({
    ...common,
    entryPoints: Object.fromEntries(["main", "refit-worker", "run", "io"].map((name) => [name, `src/cli/${name}.ts`])),
    outdir: dist,
    entryNames: "chunks/[name]",
    chunkNames: "chunks/[name]-[hash]",
    outExtension: { ".js": ".cjs" },
    splitting: true,
    format: "esm",
    define: { BACKMIX_VERSION: JSON.stringify(version), "import.meta.url": "importMetaUrl" },
  });
  mkdirSync(join(dist, "chunks"), { recursive: true });
  // Modules are read by Node one at a time and always compiled anew: as plain scripts they need neither.
  for (const { path, text } of outputFiles) {
    const { code } = await transform(text, {
      ...small,
      format: "cjs",
      platform: "node",
      target: "node20",
      supported: { "dynamic-import": false },
      banner: text.includes("importMetaUrl") ? self : "",
    });
    writeFileSync(path, code);
  }
  const entry = join(dist, "load.cjs");
  const { outputFiles: loader } = await build({
    ...common,
    entryPoints: ["src/cli/load.ts"],
    outfile: entry,
    format: "cjs",
  });
  writeFileSync(entry, loader[0].contents);
  for (const [name, chunk] of Object.entries({ thread: "main", "refit-worker": "refit-worker" }))
    writeFileSync(
      join(dist, `${name}.cjs`),
      `require("./load.cjs").load(require("node:path").join(__dirname,"chunks/${chunk}.cjs"));\n`,
    );
  const script = join(dist, "backmix.js");
  const start = 'import{createRequire}from"node:module";createRequire(import.meta.url)("./thread.cjs");';
  writeFileSync(script, `#!/usr/bin/env node\n${start}\n`);
  chmodSync(script, 0o755);
}

/** Leaves the compiled code of what `commands` (lists of arguments) use beside the chunks. */
export async function keepCompiled(root, dist, commands) {
  const args = [join(root, ".build/compiled.mjs"), dist, JSON.stringify(commands)];
  await promisify(execFile)(process.execPath, args, { cwd: root, maxBuffer: 2 ** 28 });
}
