import { readFileSync } from "node:fs";
import { compile } from "../../src/compile/compile.js";
import { random } from "../../src/numerics/random.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { trialResponse } from "../../src/simulate/trial.js";

/** What the bed "really" is. Invented (demo). */
export const truth = { head: 0.015, bed: 0.06, peclet: 40, retention: 1.8 };

const folder = "networks/detectors";
const text = (name: string) => readFileSync(`${folder}/${name}.yaml`, "utf8");

/** Standards of the dye as they were read, mg/L and mV at 20 degC: half a millivolt of scatter. */
const standards: readonly (readonly [number, number])[] = [
  [0, 12.3],
  [0.2, 411.8],
  [0.5, 1012.4],
  [1, 2011.7],
  [1.5, 3012.1],
  [2, 4011.9],
];

export const dyeStandards = (): string => `dye,signal\n${standards.map(([c, mV]) => `${c},${mV}\n`).join("")}`;

/** Concentrations at the outlet, SI, at times in minutes. */
function outlet(name: string, times: readonly number[], header: string): Float64Array {
  const network = parseNetwork(text("bed"), { path: `${folder}/bed.yaml` }).document;
  const table = `${header}\n${times
    .map(
      (t) =>
        `${t},${Array(header.split(",").length - 1)
          .fill("20")
          .join(",")}\n`,
    )
    .join("")}`;
  const read = (path: string): string => (path.endsWith("standards.csv") ? dyeStandards() : table);
  const trial = parseTrial(text(name), { path: `${folder}/${name}.yaml`, read }).document;
  const plant = network && compile(network, truth).plant;
  const series = trial?.readings[0].series;
  if (!trial || !plant || !series) throw new Error(`${name} does not parse`);
  return trialResponse(plant, trial, [series])[0];
}

/** Ten-second counts every half minute: background, Poisson scatter, five microseconds of dead time; decay as it is. */
export function countedLog(): string {
  const times = Array.from({ length: 70 }, (_, i) => Number((0.25 + 0.5 * i).toFixed(2)));
  const c = outlet("counted", times, "t,rate");
  const top = Math.max(...c);
  const draw = random(61);
  const rows = times.map((t, i) => {
    const rate = 35 + (9000 * c[i]) / top;
    const counts = Math.round(10 * rate + Math.sqrt(10 * rate) * draw.normal());
    const seen = counts / 10 / (1 + (counts / 10) * 5e-6);
    return `${t},${seen.toFixed(1)}\n`;
  });
  return `t,rate\n${rows.join("")}`;
}

/** Millivolts every half minute, from water that warms from 18 to 22 degC; nothing above 4 V. */
export function dyeLog(): string {
  const times = Array.from({ length: 90 }, (_, i) => Number((0.5 + 0.5 * i).toFixed(2)));
  const c = outlet("dye", times, "t,signal,T");
  const draw = random(62);
  const rows = times.map((t, i) => {
    const warm = 18 + (4 * i) / 89;
    const mgPerL = c[i] * 1e3;
    const noisy = mgPerL + Math.hypot(0.004, 0.01 * mgPerL) * draw.normal();
    const signal = (12 + 2000 * noisy) * (1 - 0.027 * (warm - 20));
    return `${t},${Math.min(4000, signal).toFixed(1)},${warm.toFixed(2)}\n`;
  });
  return `t,signal,T\n${rows.join("")}`;
}
