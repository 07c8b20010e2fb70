import type { Inputs } from "./inputs.js";
import type { Io } from "./io.js";
import type { Outcome } from "./outcome.js";

/** What the command line needs of its surroundings. */
export interface Stage {
  readonly io: Io;
  readonly inputs: Inputs;
  /** Runs the work of a command under its name. */
  perform(name: string, work: () => Outcome | Promise<Outcome>): Promise<void>;
  /** Takes help texts and the version. */
  write(text: string): void;
  readonly width: number;
}
