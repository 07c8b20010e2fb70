import { compile } from "../../src/compile/compile.js";
import type { Settings } from "../../src/compile/plant.js";
import { sevenPoint } from "../../src/compile/value-slopes.js";
import { networkModel } from "../../src/fit/network-model.js";
import { settingsOfDay } from "../../src/fit/settings.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { trace } from "../../src/simulate/trace.js";
import { trialOf } from "./load.js";

export const times = Float64Array.from({ length: 60 }, (_, i) => 60 * (0.37 + 1.31 * i));

/** Quantities of a text as parameters `p0`, `p1`, ... where they stand. */
export function parametrised(text: string): string {
  const values: string[] = [];
  const body = text.replace(
    /(\d+(?:\.\d+)? (?:L\/min|L|%)|(?<=peclet: |tanks: )\d+(?:\.\d+)?)/g,
    (written) => `p${values.push(written) - 1}`,
  );
  const parameters = values.map(
    (v, i) => `  p${i}: {value: ${v}, between: [0.001 ${v.split(" ")[1] ?? ""}, 1000 ${v.split(" ")[1] ?? ""}]}`,
  );
  return body.replace("feeds:", ["parameters:", ...parameters, "feeds:"].join("\n"));
}

export function trialWith(injection: string, more = "", flows = "", at = "out"): Trial {
  const csv = `t,c\n${[...times].map((t) => `${t / 60},1`).join("\n")}\n`;
  const text = `trial: t\nformat: 1\n${flows}injection: ${injection}\nreadings:\n  - at: ${at}\n    file: x.csv\n    time: {column: t, unit: min}\n    value: {column: c, unit: g/L}\n${more}`;
  return trialOf(text, () => csv);
}

/** Times at which no front passes within a hundredth of the delays: there the curve has a derivative. */
export function smooth(network: Network, trial: Trial): number[] {
  const { plant } = compile(network, settingsOfDay(network, trial, {}));
  if (!plant) throw new Error("no plant");
  const line = trial.readings[0].line.delay?.of([]) ?? 0;
  const fronts = trial.injections.flatMap((i) => {
    const delays = trace(plant, plant.entry.get(i.at) as number, 1e5).passagesAt(plant.exit.get("out") as number);
    return delays.flatMap(({ delay }) =>
      [0, i.lasting].map((w) => ({ at: i.start + w + delay + line, delay: delay + line })),
    );
  });
  return [...times.keys()].filter((k) => fronts.every((f) => Math.abs(times[k] - f.at) > 0.02 * f.delay));
}

export const respond = (network: Network, trial: Trial, values: Settings): Float64Array => {
  const answer = networkModel(network).respond(trial, values, [{ time: times }]);
  if (!answer) throw new Error("no vessel");
  return answer[0];
};

/** The largest difference from seven-point differences, as a part of the column's largest entry; rounding alone is no column. */
export function error(
  slope: Float64Array,
  at: (k: number) => Float64Array,
  h: number,
  kept: readonly number[],
): number {
  const curves = new Map([-3, -2, -1, 1, 2, 3].map((k) => [k, at(k)]));
  const differences = kept.map((i) => sevenPoint((k) => (curves.get(k) as Float64Array)[i], h));
  const rounding = (1e-13 / h) * Math.max(...(curves.get(1) as Float64Array));
  const size = Math.max(1e6 * rounding, ...differences.map(Math.abs));
  return Math.max(...kept.map((i, n) => Math.abs(slope[i] - differences[n]))) / size;
}

/** Every parameter of a network by its exact derivative and by differences. */
export function errors(network: Network, trial: Trial): [string, number][] {
  const names = network.names.filter((n) => n.role === "parameter").map((n) => n.name);
  const { plant } = compile(network);
  if (!plant) throw new Error("no plant");
  const env = plant.env;
  const values = Object.fromEntries(
    network.names.flatMap((n) => (n.role === "parameter" ? [[n.name, env[n.slot]]] : [])),
  );
  const kept = smooth(network, trial);
  const at = { values, shifted: new Set<string>() };
  const directions = names.map((name) => ({ names: new Map([[name, 1]]) }));
  const answer = networkModel(network).slopes?.(trial, at, [{ time: times }], directions);
  return names.map((name, p) => {
    const slope = answer?.slopes[p];
    if (!slope) return [name, Number.NaN];
    const h = 1e-3 * Math.abs(values[name]);
    return [
      name,
      error(slope[0], (k) => respond(network, trial, { ...values, [name]: values[name] + k * h }), h, kept),
    ];
  });
}

export const pulse = "{at: feed, pulse: 50 g, start: 0 min, lasting: 2 min}";

/** A vessel of some compartments between a feed into `a` and an outlet. */
export const vessel = (body: string, parameters = ""): string =>
  `network: n\nformat: 1\n${parameters}feeds:\n  feed: {flow: 10 L/min, to: a}\ncompartments:\n${body}\noutlets: [out]\n`;
