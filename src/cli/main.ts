#!/usr/bin/env node
import { isMainThread } from "node:worker_threads";
import { runAlone } from "./alone.js";
import { endWithReader, files, streams, terminal } from "./io.js";
import { run } from "./run.js";
import { runInWorker } from "./worker.js";

/** Commands that may run long: they work in a thread of their own, so that this one hears an interrupt. */
const long = new Set(["fit", "study"]);

if (!isMainThread) await runInWorker();
else {
  endWithReader();
  const args = process.argv.slice(2);
  const isHelp = args.some((a) => a === "--help" || a === "-h");
  process.exitCode =
    long.has(args[0] ?? "") && !isHelp
      ? await runAlone(args, new URL(import.meta.url))
      : await run(args, { ...files(process.cwd()), ...terminal(), ...streams, cancelled: () => false });
}
