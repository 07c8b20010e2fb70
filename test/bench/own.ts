// One of our own runs in a process of its own, as the peers have: `own CASE ARGUMENTS…` prints one JSON document.
import { log } from "./own/log.js";
import { p1 } from "./own/p1.js";
import { p2 } from "./own/p2.js";
import { p3 } from "./own/p3.js";
import { p4 } from "./own/p4.js";
import { p4Transient } from "./own/p4-transient.js";
import { watch } from "./own/watch.js";

type Job = (args: string[]) => Record<string, unknown> | Promise<Record<string, unknown>>;
const jobs: Readonly<Record<string, Job>> = { p1, log, p2, p3, p4, "p4-transient": p4Transient, watch };
const [name, ...args] = process.argv.slice(2);
const printed = await jobs[name](args);
console.log(JSON.stringify({ ...printed, peak_kB: process.resourceUsage().maxRSS }));
