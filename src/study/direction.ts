import type { Duty } from "../model/duty.js";

/**
 * Which way a report line of a duty is better: 1 up, -1 down, 0 where it has no direction. What a feed brings and is left
 * over is better low; what is made is better high; so are conversion, yield, selectivity, kill and the early tracer times. Temperatures have no direction.
 */
export function betterIs(duty: Duty, line: number): 1 | -1 | 0 {
  const { what, of } = duty.report[line];
  if (what === "temperature" || what === "time-beyond") return 0;
  if (what !== "concentration") return 1;
  const fed = [...duty.feeds.values()].some((feed) => (feed.species.get(of)?.value.of([]) ?? 0) > 0);
  return fed ? -1 : 1;
}
