import type { Duty } from "../model/duty.js";

/**
 * Which way a report line of a duty is better: 1 up, -1 down, 0 where it has no direction. What a feed brings and is left
 * over is better low; what is made is better high; so are conversion, yield, selectivity, kill and the early tracer times. A limit
 * is what one would rather not pass, on either side; temperatures have no direction.
 */
export function betterIs(duty: Duty, line: number): 1 | -1 | 0 {
  const { what, of } = duty.report[line];
  if (what === "temperature") return 0;
  if (what === "time-beyond") return -1;
  if (what !== "concentration") return 1;
  const fed = [...duty.feeds.values()].some((feed) => (feed.species.get(of)?.value.of([]) ?? 0) > 0);
  return fed ? -1 : 1;
}
