import { fitAgain } from "./log.js";

/** The fit alone, again and again in one process, until it is warm on a busy machine too: network, trial. */
export function p1([network, trial]: string[]): Record<string, unknown> {
  const { outcome, first, again } = fitAgain(network, trial, 60);
  return { first_s: first, solve_s: again, ssr: outcome.fit?.residualSumOfSquares };
}
