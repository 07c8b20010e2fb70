import { parentPort, workerData } from "node:worker_threads";
import { corpusOf } from "./corpus.js";
import { inputOf } from "./input.js";
import { faultOf } from "./survive.js";

/** Takes one input after the other and says of each when it begins and what came of it, until it is ended from outside. */
const { root, seed, first, only } = workerData as { root: string; seed: number; first: number; only: boolean };
const corpus = corpusOf(root);
for (let n = first; ; n++) {
  const input = inputOf(corpus, seed, n);
  parentPort?.postMessage({ n, path: input.path, ...(only ? { text: new TextDecoder().decode(input.bytes) } : {}) });
  let fault: string | undefined;
  try {
    fault = await faultOf(input, corpus);
  } catch (e) {
    fault = `thrown: ${e instanceof Error ? e.stack : String(e)}`;
  }
  parentPort?.postMessage({ n, path: input.path, fault, memory: process.memoryUsage().rss });
  if (only) break;
  await new Promise((resolve) => setImmediate(resolve)); // lets messages out
}
