import type { Problem } from "../problems/problem.js";
import type { ExitStatus } from "./io.js";

/** What a command comes to. The runner prints it, as text or as one JSON document. */
export interface Outcome {
  readonly status: ExitStatus;
  /** For people, on standard output. */
  readonly text: string;
  /** What the JSON document holds after `backmix`, `command` and `inputs`. */
  readonly json: Readonly<Record<string, unknown>>;
  /** Shown to people on standard error, after the result; in the JSON document under `problems`. */
  readonly problems?: readonly Problem[];
  /** More for standard error: how a run ended. */
  readonly notes?: readonly string[];
}

export { UsageError } from "./usage.js";

/** The documents are wrong: exit status 1, with what is wrong. */
export class InputError extends Error {
  constructor(readonly problems: readonly Problem[]) {
    super("the input is wrong");
  }
}
