import { writeFileSync } from "node:fs";
import { tracerResponse } from "../../../src/index.js";
import { latticePlant, repeated } from "./load.js";

/** A lattice's curve: folder, file for the curve. */
export function p2([folder, out]: string[]): Record<string, unknown> {
  const { plant, seconds } = latticePlant(folder);
  const tau = plant.volume.active / plant.feeds[0].flow;
  const times = Float64Array.from({ length: 200 }, (_, k) => (3 * tau * k) / 199);
  const { first, again, result } = repeated(() => tracerResponse(plant, { at: "feed", form: "pulse" }, times), 6);
  const { value } = result.readings[0];
  let text = "t_min,E_per_min\n";
  for (let k = 0; k < times.length; k++) text += `${times[k] / 60},${value[k] * 60}\n`;
  writeFileSync(out, text);
  // Moments are found when they are asked for; the curves have everything else.
  const began = performance.now();
  const { mean } = result.readings[0].moments;
  const moments = (performance.now() - began) / 1000;
  return {
    method: result.engine,
    read_s: seconds,
    first_s: first,
    solve_s: again,
    moments_s: moments,
    mean_off: mean / tau - 1,
    closure: result.balance.closure,
  };
}
