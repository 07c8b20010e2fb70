import type { Problem } from "./problem.js";

/** An engine was given what it cannot carry; whoever calls it may ask before. */
export class RefusedError extends RangeError {
  constructor(readonly problems: readonly Problem[]) {
    super(problems.map((p) => p.message).join("; "));
  }
}
