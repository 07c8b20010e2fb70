import { parentPort, workerData } from "node:worker_threads";
import { type RefitJob, type RefitSpan, refitsOfJob, rowsOf } from "./refit-job.js";

/** A thread that answers spans of refits with their values. */
const refits = refitsOfJob(workerData as RefitJob);
parentPort?.on("message", (span: RefitSpan) => {
  parentPort?.postMessage(refits ? rowsOf(refits, span) : []);
});
