import type { Inputs } from "./inputs.js";
import type { Io } from "./io.js";

/** What every command is handed besides its own arguments. */
export interface Context {
  readonly inputs: Inputs;
  readonly io: Io;
}
