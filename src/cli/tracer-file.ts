import { type Curves, plotCurves } from "../draw/curves.js";
import { curvesCsv } from "./csv.js";
import { drawnAs } from "./drawn-as.js";

/** Tracer curves in the units that they are written in. */
export interface TracerCurves {
  readonly title: string;
  /** "E, exit age, 1/min". */
  readonly y: string;
  readonly units: Parameters<typeof curvesCsv>[1];
  readonly curves: Parameters<typeof curvesCsv>[0];
  /** Where the areas of spikes are no shares of the whole: what stands at one. */
  readonly spikeWords?: (area: number) => string;
}

/** Tracer curves as the ending of their file asks for: CSV, SVG or PNG. */
export async function tracerFile(file: string, tracer: TracerCurves): Promise<string | Uint8Array> {
  const { title, y, units, curves, spikeWords } = tracer;
  if (/\.csv$/i.test(file)) return curvesCsv(curves, units);
  const drawn: Curves = {
    title,
    x: `time, ${units.time}`,
    y,
    lines: curves.map(({ at, time, value, spikes }) => ({
      label: at,
      x: time,
      y: value,
      spikes: (spikes ?? []).slice(0, 6).map((s) => ({
        x: s.time,
        area: s.area,
        ...(spikeWords ? { words: spikeWords(s.area) } : {}),
      })),
    })),
  };
  return drawnAs(file, (options) => plotCurves(drawn, options));
}
