// `npm run bench -- [case …] [size …]`: bundles test/bench and runs it. See test/bench/bench.ts.
import { spawnSync } from "node:child_process";
import { join } from "node:path";
import { build } from "esbuild";
import { root } from "./schemas.mjs";

const folder = join(root, "reports", "bench"); // git-ignored
await build({
  absWorkingDir: root,
  entryPoints: { bench: "test/bench/bench.ts", own: "test/bench/own.ts", coverage: "test/bench/coverage/run.ts" },
  outdir: folder,
  outExtension: { ".js": ".mjs" },
  bundle: true,
  splitting: true,
  packages: "external",
  format: "esm",
  platform: "node",
  target: "node20",
  logLevel: "error",
});
const { status } = spawnSync(process.execPath, [join(folder, "bench.mjs"), ...process.argv.slice(2)], {
  stdio: "inherit",
  env: { ...process.env, BACKMIX_ROOT: root },
});
process.exitCode = status ?? 1;
