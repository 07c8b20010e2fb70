import { Worker } from "node:worker_threads";
import { type ExitStatus, files, type Io, onInterrupt, streams, terminal } from "./io.js";

/** What the working thread tells the one that listens. */
export type Message = { readonly out: string } | { readonly err: string } | { readonly end: ExitStatus };

/** What the working thread is given. `flag[0]` becomes 1 when the user asks to stop. */
export interface WorkerData extends Pick<Io, "isTerminal" | "colour"> {
  readonly args: readonly string[];
  readonly cwd: string;
  readonly flag: Int32Array;
}

/** Young memory of a thread that computes, MB: what a fit needs for a moment is then seldom moved about. */
const maxYoungGenerationSizeMb = 64;

/**
 * Runs a command line in a thread of its own. The first interrupt asks it to come to an end and print what it has; a
 * second one ends it at once.
 * @param script  the file that the thread starts from
 */
export function runAlone(args: readonly string[], script: string): Promise<ExitStatus> {
  const flag = new Int32Array(new SharedArrayBuffer(4));
  const data: WorkerData = { args, cwd: process.cwd(), flag, ...terminal() };
  const worker = new Worker(script, { workerData: data, resourceLimits: { maxYoungGenerationSizeMb } });
  const interrupted = (): void => {
    if (Atomics.exchange(flag, 0, 1) === 0) streams.err("\nbackmix: stopping; again to end at once\n");
    else process.exit(130);
  };
  const listenNoMore = onInterrupt(interrupted);
  return new Promise((done) => {
    let status: ExitStatus | Promise<ExitStatus> = 3;
    worker.on("message", (m: Message) => {
      if ("out" in m) streams.out(m.out);
      else if ("err" in m) streams.err(m.err);
      else status = m.end;
    });
    worker.on("error", (e) => {
      // What words a fault is loaded where there is one: this thread has nothing to do but to listen.
      const io = { ...files(data.cwd), ...terminal(), ...streams, cancelled: () => false };
      status = import("./run.js").then(({ tellFault }) => tellFault(e, args, io));
    });
    worker.on("exit", () => {
      listenNoMore();
      done(status);
    });
  });
}
