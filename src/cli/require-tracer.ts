import type { Trial } from "../model/trial.js";
import { problem } from "../problems/report.js";
import { InputError } from "./outcome.js";

/**
 * Refuses a trial of a reaction where only tracers can be followed.
 * @param what the command, as a sentence begins with it
 * @throws InputError
 */
export function requireTracer(trial: Trial, what: string): void {
  if (!trial.reacting) return;
  throw new InputError([problem("trial-of-reaction", trial.reacting.at, { title: trial.title, what })]);
}
