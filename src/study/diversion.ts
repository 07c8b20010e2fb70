import type { Reported } from "../model/duty.js";
import type { Span } from "../transient/beyond.js";
import { type Diversion, diversionOf } from "../transient/diversion.js";
import { transientFigures } from "../transient/figures.js";
import { roughRun } from "../transient/in-time.js";
import { dutySettings, type Operation, plantOf, type Row } from "./operate.js";

/** When to divert what leaves, by one line of the duty's report. */
export interface DiversionWindow {
  readonly line: Reported;
  /** Undefined where no draw is beyond the limit. */
  readonly window: Diversion | undefined;
  /** Draws that could be followed. */
  readonly draws: number;
}

/**
 * For each `time A at product above ...` of a duty, the window that holds nearly all of what is beyond the limit over the draws.
 * @param delay s: how late an analyser tells
 */
export function diversionWindows(operation: Operation, rows: readonly Row[], delay: number): DiversionWindow[] {
  const { duty } = operation;
  const lines = duty.report.filter((line) => line.what === "time-beyond");
  const found = lines.map((): (readonly Span[])[] => []);
  const open = lines.map(() => 0);
  for (const row of rows) {
    const { plant } = plantOf(operation, row);
    if (!plant) continue;
    const settings = dutySettings(duty, row);
    const run = roughRun(plant, duty, settings);
    if (run.stopped) continue;
    const beyond = transientFigures(plant, { ...duty, report: lines }, run, settings).map((f) => f.beyond);
    beyond.forEach((b, k) => {
      if (b) found[k].push(b.spans);
      if (b?.stillAtEnd) open[k]++;
    });
  }
  const { plant } = plantOf(operation);
  return lines.map((line, k) => ({
    line,
    window: diversionOf(found[k], {
      delay,
      flow: plant?.columns.inflow[plant.exit.get(line.at ?? "") ?? 0] ?? 0,
      open: open[k],
    }),
    draws: found[k].length,
  }));
}
