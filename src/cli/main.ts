import { isMainThread } from "node:worker_threads";
import { endWithReader, files, streams, terminal } from "./io.js";
import { threadFile } from "./thread-file.js";
import { version } from "./version.js";

/** Commands that may run long: they work in a thread of their own, so that this one hears an interrupt. */
const long = new Set(["fit", "study"]);

/** Each way loads what it needs and no more: starting is most of the time of a short command. */
async function start(): Promise<void> {
  if (!isMainThread) {
    const { runInWorker } = await import("./worker.js");
    return runInWorker();
  }
  endWithReader();
  const args = process.argv.slice(2);
  if (args.length === 1 && args[0] === "--version") return streams.out(`${version}\n`);
  const script = threadFile("thread");
  if (script && long.has(args[0] ?? "") && !args.some((a) => a === "--help" || a === "-h")) {
    const { runAlone } = await import("./alone.js");
    process.exitCode = await runAlone(args, script);
  } else {
    const { run } = await import("./run.js");
    process.exitCode = await run(args, { ...files(process.cwd()), ...terminal(), ...streams, cancelled: () => false });
  }
}

void start();
