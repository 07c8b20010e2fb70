// `npm run bench -- [case …] [size …] [--rounds N] [--quick] [--own]`: times the program on the cases of
// `cases/` beside what an engineer would write with general-purpose libraries (`peers/`), prints ratios, and writes reports/bench.json. Started by .build/bench.mjs, which bundles it.
import { mkdirSync, writeFileSync } from "node:fs";
import { cpus, loadavg } from "node:os";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";
import { parseArgs } from "node:util";
import { log } from "./cases/log.js";
import { p1 } from "./cases/p1.js";
import { p2 } from "./cases/p2.js";
import { p3 } from "./cases/p3.js";
import { p4 } from "./cases/p4.js";
import { p5 } from "./cases/p5.js";
import { startUp } from "./cases/start-up.js";
import { watch } from "./cases/watch.js";
import { type Bench, type Planned, type Setting, smallest } from "./cases.js";
import { contest, type Standing } from "./contest.js";
import { coverage } from "./coverage/all.js";
import { findPeers } from "./peers.js";
import { fittedExponent, standingsTable } from "./print.js";

const benches: readonly Bench[] = [startUp, p1, log, p2, p3, p4, p5, watch];
const usage = `usage: npm run bench -- [CASE …] [SIZE …] [--rounds N] [--quick] [--own]
cases: ${benches.map((b) => b.name).join(", ")}; a size selects among the lattices of p2 and p3; --quick leaves out those over 64,000 cells;
--own runs no peers
       npm run bench -- coverage [SETS]: how often 95 % intervals hold the truth, 500 sets of every sort if not said (an hour)`;

const root = process.env.BACKMIX_ROOT ?? dirname(dirname(fileURLToPath(import.meta.url)));
if (process.argv[2] === "coverage") {
  const sets = Number(process.argv[3] ?? 500);
  await coverage(root, join(root, "reports", "bench"), sets);
  process.exit(0);
}
const asked = read();
if (!asked) {
  console.error(usage);
  process.exit(2);
}
const work = join(root, "reports", "bench");
mkdirSync(work, { recursive: true });
const peers = findPeers(join(root, "test/bench/peers"), join(work, "programs"));
for (const why of peers.missing) console.log(why);
console.log(
  `${cpus().length} processors, ${cpus()[0]?.model ?? "unknown"}, load ${loadavg()[0].toFixed(1)}, Node ${process.version}\n`,
);
const setting: Setting = {
  root,
  work,
  peers: asked.own ? { missing: [], scipy: () => [], compiled: () => [] } : peers,
  own: (...args) => [process.execPath, join(work, "own.mjs"), ...args],
  sizes: asked.sizes,
  quick: asked.quick,
};
const results: { bench: string; title: string; target: string; size?: number; standings: Standing[] }[] = [];
for (const bench of benches) {
  if (asked.names.length > 0 && !asked.names.includes(bench.name)) continue;
  console.log(`${bench.name}: ${bench.says}`);
  for await (const planned of bench.plan(setting)) await hold(bench, planned);
  if (bench.grows) printGrowth(bench.name);
}
const path = join(root, "reports", "bench.json");
writeFileSync(
  path,
  `${JSON.stringify({ node: process.version, processors: cpus().length, model: cpus()[0]?.model, missing: peers.missing, results }, null, 1)}\n`,
);
console.log(`written: reports/bench.json`);

async function hold(bench: Bench, planned: Planned): Promise<void> {
  const standings = await contest(planned.contestants, asked?.rounds ?? planned.rounds, planned.limit);
  const { title, target, size } = planned;
  results.push({ bench: bench.name, title, target, ...(size ? { size } : {}), standings });
  console.log(standingsTable(planned, standings));
  for (const note of planned.notes?.(standings) ?? []) console.log(`  ${note}`);
  console.log("");
}

/** How the cost grows with cells, of all that ran at two sizes or more from 8,000 cells on. */
function printGrowth(name: string): void {
  const points = new Map<string, [number, number][]>();
  for (const { bench, size, standings } of results) {
    if (bench !== name || size === undefined || size < smallest) continue;
    for (const s of standings) {
      if (s.seconds !== undefined) points.set(s.name, [...(points.get(s.name) ?? []), [size, s.seconds]]);
    }
  }
  for (const [who, at] of points) {
    if (at.length < 2) continue;
    const range = `${at[0][0].toLocaleString("en")} to ${at[at.length - 1][0].toLocaleString("en")} cells`;
    console.log(`  ${who}: time grows as cells^${fittedExponent(at).toFixed(2)} from ${range}`);
  }
  console.log("");
}

function read() {
  try {
    const { values, positionals } = parseArgs({
      allowPositionals: true,
      options: { rounds: { type: "string" }, quick: { type: "boolean" }, own: { type: "boolean" } },
    });
    const sizes = positionals.filter((p) => /^\d+$/.test(p)).map(Number);
    const names = positionals.filter((p) => !/^\d+$/.test(p));
    const rounds = values.rounds === undefined ? undefined : Number(values.rounds);
    const known = names.every((n) => benches.some((b) => b.name === n));
    if (!known || (rounds !== undefined && !(rounds >= 1 && Number.isInteger(rounds)))) return undefined;
    return { names, sizes, rounds, quick: values.quick === true, own: values.own === true };
  } catch {
    return undefined;
  }
}
