// Builds everything that is not committed: validators, the bundled command line, the library and its types.
import { execFile } from "node:child_process";
import { chmodSync, existsSync, readFileSync, rmSync } from "node:fs";
import { join } from "node:path";
import { promisify } from "node:util";
import { build } from "esbuild";
import { root, writeManual, writeSchemas } from "./schemas.mjs";

const { version } = JSON.parse(readFileSync(join(root, "package.json"), "utf8"));
const dist = join(root, "dist");

async function bundle(entry, name, options = {}) {
  if (!existsSync(join(root, entry))) return console.log(`build: ${entry} is not there yet, skipped`);
  await build({
    absWorkingDir: root,
    entryPoints: { [name]: entry },
    outdir: dist,
    bundle: true,
    splitting: true,
    format: "esm",
    platform: "node",
    target: "node20",
    chunkNames: "chunks/[name]-[hash]",
    define: { BACKMIX_VERSION: JSON.stringify(version) },
    minifyWhitespace: true, // a third less to read at every start
    minifySyntax: true,
    logLevel: "warning",
    ...options,
  });
}

/** Packages written as CommonJS look for `require`, which an ES module lacks. */
const requireBanner =
  'import { createRequire as makeRequire } from "node:module"; const require = makeRequire(import.meta.url);';

async function types() {
  if (!existsSync(join(root, "src/index.ts"))) return;
  const tsc = join(root, "node_modules/typescript/bin/tsc");
  const args = [tsc, "-p", join(root, ".build/tsconfig.types.json")];
  await promisify(execFile)(process.execPath, args).catch((e) => {
    console.error(e.stdout || e.message);
    process.exitCode = 1;
  });
}

try {
  await writeSchemas();
  await writeManual();
  rmSync(dist, { recursive: true, force: true });
  await Promise.all([
    // The shebang comes from the entry file itself, so that only it carries one, not the chunks.
    bundle("src/cli/main.ts", "backmix", {
      entryPoints: { backmix: "src/cli/main.ts", "refit-worker": "src/cli/refit-worker.ts" },
      banner: { js: requireBanner },
    }),
    bundle("src/index.ts", "index", { packages: "external" }),
    types(),
  ]);
} catch (e) {
  // esbuild has said what is wrong, and where.
  if (!e.errors) throw e;
  process.exit(1);
}
if (existsSync(join(dist, "backmix.js"))) chmodSync(join(dist, "backmix.js"), 0o755);
