import { fitAgain } from "./log.js";

/** The fit alone, again and again in one process: network, trial. */
export function p1([network, trial]: string[]): Record<string, unknown> {
  const { outcome, first, again } = fitAgain(network, trial);
  return { first_s: first, solve_s: again, ssr: outcome.fit?.residualSumOfSquares };
}
