import { parentPort, workerData } from "node:worker_threads";
import type { Message, WorkerData } from "./alone.js";
import { files } from "./io.js";
import { run } from "./run.js";

/** The other end of `runAlone`: the same command line, its words sent to the thread that listens. */
export async function runInWorker(): Promise<void> {
  const { args, cwd, flag, isTerminal, colour } = workerData as WorkerData;
  const tell = (message: Message): void => parentPort?.postMessage(message);
  const end = await run(args, {
    ...files(cwd),
    isTerminal,
    colour,
    out: (out) => tell({ out }),
    err: (err) => tell({ err }),
    cancelled: () => Atomics.load(flag, 0) === 1,
  });
  tell({ end });
}
