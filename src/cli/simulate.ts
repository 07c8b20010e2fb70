import { parseNetwork } from "../parse/network.js";
import type { Context } from "./context.js";
import { type Outcome, UsageError } from "./outcome.js";
import type { SimulateOptions } from "./simulate-options.js";

/** `simulate NETWORK`: tracer after a pulse, a step or as in a trial; or a duty, steady or in time. */
export async function simulate(file: string, options: SimulateOptions, context: Context): Promise<Outcome> {
  const asked = (["pulse", "step", "trial", "duty"] as const).filter((key) => options[key] !== undefined);
  if (asked.length !== 1) {
    throw new UsageError("say what to simulate: one of --pulse FEED, --step FEED, --trial FILE and --duty FILE");
  }
  if (options.states !== undefined && (asked[0] !== "duty" || options.transient || options.along !== undefined)) {
    throw new UsageError("--states goes with --duty FILE, without --transient and --along: it follows steady states");
  }
  if ((options.transient || asked[0] !== "duty") && options.output !== undefined) {
    if (!/\.(csv|svg|png)$/i.test(options.output))
      throw new UsageError(`-o writes CSV, SVG or PNG here: name a file with that ending, not '${options.output}'`);
  } else if (options.output !== undefined && options.states === undefined && !/\.csv$/i.test(options.output)) {
    throw new UsageError(`-o writes CSV: name a file that ends in .csv, not '${options.output}'`);
  }
  if (options.ages !== undefined) {
    if (options.pulse === undefined && options.step === undefined) {
      throw new UsageError("--ages goes with --pulse or --step: mean ages are the network's own, with its own flows");
    }
    if (!/\.csv$/i.test(options.ages)) {
      throw new UsageError(`--ages writes CSV: name a file that ends in .csv, not '${options.ages}'`);
    }
  }
  if (options.along !== undefined && (asked[0] !== "duty" || options.transient)) {
    throw new UsageError("--along goes with --duty FILE, without --transient: it is about what has settled");
  }
  for (const key of ["funnel", "draws", "delay"] as const) {
    if (options[key] !== undefined && !options.transient) throw new UsageError(`--${key} goes with --transient`);
  }
  if (options.transient && asked[0] !== "duty") throw new UsageError("--transient goes with --duty FILE");
  if (asked[0] === "duty" && options.transient) {
    if (options.verify)
      throw new UsageError("--verify compares tracer engines; a transient has one way to be followed");
    if (options.engine !== "auto")
      throw new UsageError("--engine is for tracer; a transient has one way to be followed");
  } else if (asked[0] === "duty") {
    for (const key of ["until", "points", "times", "verify"] as const) {
      if (options[key] !== undefined)
        throw new UsageError(
          `--${key} says nothing about the steady state of a duty; with --transient it is followed in time`,
        );
    }
    if (options.engine !== "auto") throw new UsageError("--engine is for tracer; a duty has one way to be solved");
  }
  const network = context.inputs.document(file, parseNetwork);
  switch (asked[0]) {
    case "duty":
      if (options.transient)
        return (await import("./simulate-transient.js")).simulateTransient(network, options, context);
      if (options.states !== undefined)
        return (await import("./simulate-states.js")).simulateStates(network, options, options.states, context);
      return (await import("./simulate-duty.js")).simulateDuty(network, options, context);
    case "trial":
      return (await import("./simulate-trial.js")).simulateTrial(network, options, context);
    default:
      return (await import("./simulate-unit.js")).simulateUnit(network, options, context);
  }
}
