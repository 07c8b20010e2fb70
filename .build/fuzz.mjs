// Feeds mutated files to the program for as long as asked: `npm run fuzz -- --minutes 10 --seed 2`.
// `npm run fuzz -- --networks 1000 --seed 2` puts random networks through the engines instead.
// `--only N` makes one input again, prints it and what came of it. Ends with status 1 where an input was taken badly.
import { spawnSync } from "node:child_process";
import { mkdtempSync, rmSync, symlinkSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { parseArgs } from "node:util";
import { Worker } from "node:worker_threads";
import { build } from "esbuild";
import { root, schemasAreStale, writeSchemas } from "./schemas.mjs";

/** An input may take so many seconds of processor time (which other work does not stretch), and the program so much memory. */
const patience = 2;
const memoryLimit = 2 ** 30;

const { values } = parseArgs({
  options: {
    minutes: { type: "string", default: "1" },
    seed: { type: "string", default: "1" },
    only: { type: "string" },
    networks: { type: "string" },
  },
});
const minutes = Number(values.minutes);
const seed = Number(values.seed);
const only = values.only === undefined ? undefined : Number(values.only);
if (![minutes, seed, only ?? 0].every((x) => Number.isFinite(x) && x >= 0)) {
  console.error("usage: npm run fuzz -- [--minutes M] [--seed S] [--only N]");
  process.exit(2);
}

if (values.networks !== undefined) {
  const vitest = join(root, "node_modules/vitest/vitest.mjs");
  const env = { ...process.env, BACKMIX_NETWORKS: values.networks, BACKMIX_SEED: values.seed };
  const args = [vitest, "run", "test/simulate/random-"];
  process.exit(spawnSync(process.execPath, args, { cwd: root, env, stdio: "inherit" }).status ?? 1);
}

if (schemasAreStale()) await writeSchemas();
const folder = mkdtempSync(join(tmpdir(), "backmix-fuzz-"));
process.on("exit", () => rmSync(folder, { recursive: true, force: true }));
symlinkSync(join(root, "node_modules"), join(folder, "node_modules"));
await build({
  absWorkingDir: root,
  entryPoints: ["test/fuzz/worker.ts"],
  outfile: join(folder, "worker.mjs"),
  bundle: true,
  packages: "external",
  format: "esm",
  platform: "node",
  target: "node20",
  logLevel: "error",
});

const faults = [];
let [inputs, next, most] = [0, only ?? 0, 0];
const end = Date.now() + minutes * 60_000;

/** Seconds of processor time of all threads. */
function spent() {
  const { user, system } = process.cpuUsage();
  return (user + system) / 1e6;
}

/** Runs inputs in a thread of their own until time is up, or one takes too long or too much: then that is its fault. */
function go() {
  return new Promise((resolve) => {
    const worker = new Worker(join(folder, "worker.mjs"), {
      workerData: { root, seed, first: next, only: only !== undefined },
      resourceLimits: { maxOldGenerationSizeMb: memoryLimit / 2 ** 20 },
    });
    let [current, since] = [undefined, spent()];
    const stop = (fault) => {
      clearInterval(watch);
      if (fault) faults.push({ ...current, fault });
      if (current) next = current.n + 1;
      worker.terminate().then(resolve);
    };
    const watch = setInterval(() => {
      if (current && spent() - since > patience) stop(`took more than ${patience} s`);
      else if (only === undefined && Date.now() > end) stop();
    }, 100);
    worker.on("message", (m) => {
      if (!("memory" in m)) {
        [current, since] = [m, spent()];
        if (m.text !== undefined) console.log(`${m.path}\n${m.text}`);
        return;
      }
      inputs++;
      most = Math.max(most, m.memory);
      if (m.fault) faults.push(m);
      if (m.memory > memoryLimit) stop(`took ${Math.round(m.memory / 2 ** 20)} MiB`);
      current = undefined;
      next = m.n + 1;
      if (only !== undefined) stop();
    });
    worker.on("error", (e) => stop(`ended the program: ${e.message}`));
  });
}

do await go();
while (only === undefined && Date.now() < end);

for (const { n, path, fault } of faults) console.log(`input ${n} (${path}): ${fault}`);
console.log(
  `${inputs} inputs of seed ${seed}, ${faults.length} taken badly; at most ${Math.round(most / 2 ** 20)} MiB of memory`,
);
if (faults.length > 0) {
  console.log(`again: npm run fuzz -- --seed ${seed} --only ${faults[0].n}`);
  process.exitCode = 1;
}
