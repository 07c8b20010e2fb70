// Builds everything that is not committed: validators, the bundled command line, the library and its types.
import { execFile } from "node:child_process";
import { existsSync, readFileSync, rmSync } from "node:fs";
import { join } from "node:path";
import { promisify } from "node:util";
import { build } from "esbuild";
import { buildProgram, keepCompiled } from "./program.mjs";
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

/** What the code that is kept compiled is made of: the short commands, and the fit with its refits. */
const tank = "test/fit/p1/p1";
const commands = [
  ["check", `${tank}.yaml`],
  ["fit", `${tank}.yaml`, "--trial", `${tank}-pulse.yaml`, "--bootstrap", "20", "--jobs", "1"],
  ["fit", `${tank}.yaml`, "--trial", `${tank}-pulse.yaml`, "--json"],
];

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
    buildProgram(root, dist, version)
      .then(() => keepCompiled(root, dist, commands))
      // The program runs without, only more slowly.
      .catch((e) => (e.errors ? Promise.reject(e) : console.error(`build: no compiled code is kept: ${e.message}`))),
    bundle("src/index.ts", "index", { packages: "external" }),
    types(),
  ]);
} catch (e) {
  // esbuild has said what is wrong, and where.
  if (!e.errors) throw e;
  process.exit(1);
}
